import { describe, expect, test } from 'vitest';
import { useTestDatabase } from '../support/database.js';
import { storedReads } from '../support/ingest.js';
import { expectProblem, useDoor } from '../support/use-door.js';

const db = useTestDatabase();
const door = useDoor(db, { limits: { idleMs: 100 } });
const body = () => JSON.stringify({ reads: [door.read()] });
const chunked = (text: string) => `${text.length.toString(16)}\r\n${text}\r\n0\r\n\r\n`;

/** A whole good request, to be hidden in the body of another. */
const hidden = () => `${door.head(`Content-Length: ${body().length}`)}${body()}`;

/** A body that is empty by one reading of its head, and holds `hidden` by the other. */
const smuggled = () => `0\r\n\r\n${hidden()}`;

/** Sends bytes and gives the status of all answers until the server hangs up. */
async function statusesOf(bytes: string): Promise<number[]> {
  const socket = await door.connect();
  await socket.write(bytes);
  return (await socket.answersUntilClosed()).map(({ status }) => status);
}

describe('a head that can be read in two ways', () => {
  test.each([
    ['two lengths', () => ['Content-Length: 5', `Content-Length: ${body().length}`], body],
    ['two equal lengths', () => Array<string>(2).fill(`Content-Length: ${body().length}`), body],
    ['two lengths in one', () => [`Content-Length: 5, ${body().length}`], body],
    ['a length and chunks', () => ['Content-Length: 5', 'Transfer-Encoding: chunked'], smuggled],
    ['chunks and a length', () => ['Transfer-Encoding: chunked', 'Content-Length: 5'], smuggled],
    ['chunks and more behind them', () => ['Transfer-Encoding: chunked, identity'], smuggled],
    [
      'a space before the colon',
      () => ['Transfer-Encoding : chunked', 'Content-Length: 5'],
      smuggled,
    ],
    ['a folded line', () => ['Transfer-Encoding:', ' chunked', 'Content-Length: 5'], smuggled],
    [
      'a bare carriage return',
      () => ['X: a\rTransfer-Encoding: chunked', 'Content-Length: 5'],
      smuggled,
    ],
    ['a NUL in a name', () => ['X\0: 1', 'Content-Length: 5'], smuggled],
    ['a signed length', () => [`Content-Length: +${body().length}`], body],
    ['a negative length', () => ['Content-Length: -1'], body],
    ['a length in hex', () => ['Content-Length: 0x20'], body],
    ['a length of no number', () => ['Content-Length: many'], body],
    ['an empty length', () => ['Content-Length:'], body],
    ['a length beyond counting', () => [`Content-Length: ${'9'.repeat(40)}`], body],
    ['no colon', () => ['Transfer-Encoding chunked', 'Content-Length: 5'], smuggled],
  ])('is refused, and the connection ends: %s', async (_what, headers, bodyOf) => {
    expect(await statusesOf(door.head(...headers()) + bodyOf())).toEqual([400]);
    expect(await storedReads(db)).toEqual([]);
  });
});

describe('chunks that can be read in two ways', () => {
  test.each([
    ['a size of no number', (text: string) => `x${chunked(text)}`],
    ['a size with a sign', (text: string) => `-${chunked(text)}`],
    ['a size beyond counting', (text: string) => `${'f'.repeat(17)}${chunked(text)}`],
    ['a size in two parts', (text: string) => `1 ${chunked(text)}`],
    ['no line end after a chunk', (text: string) => chunked(text).replace('}\r\n', '}')],
    ['an empty size', () => '\r\n\r\n'],
  ])('are refused: %s', async (_what, chunksOf) => {
    expect(await statusesOf(door.head('Transfer-Encoding: chunked') + chunksOf(body()))).toEqual([
      400,
    ]);
    expect(await storedReads(db)).toEqual([]);
  });

  test('with fields after the last one change nothing', async () => {
    const socket = await door.connect();
    const trailer = chunked(body()).replace(
      /\r\n$/,
      'Authorization: Bearer wrong\r\nSite: X\r\n\r\n',
    );
    await socket.write(door.head('Transfer-Encoding: chunked', 'Trailer: Site') + trailer);
    expect(await socket.answer()).toMatchObject({ status: 200, body: { accepted: 1 } });
  });
});

describe('a first line that is none', () => {
  test.each([
    ['a protocol of the future', () => hidden().replace('HTTP/1.1', 'HTTP/9.9')],
    ['a method nobody knows', () => hidden().replace('POST', 'TAKE')],
    ['no host', () => hidden().replace('Host: reader\r\n', '')],
    ['a blank in the address', () => hidden().replace('/api/', '/a pi/')],
    ['the greeting of encryption', () => '\x16\x03\x01\x02\x00\x01\x00\x01\xfc\x03\x03'],
  ])('is refused: %s', async (_what, bytesOf) => {
    expect(await statusesOf(bytesOf())).toEqual([400]);
    expect(await storedReads(db)).toEqual([]);
  });
});

describe('addresses and methods', () => {
  test.each(['GET', 'PUT', 'PATCH', 'DELETE', 'PROPFIND'])('%s is no way in', async (method) => {
    const socket = await door.connect();
    await socket.write(hidden().replace('POST', method));
    expectProblem((await socket.answer())!, 404);
    expect(await storedReads(db)).toEqual([]);
  });

  test.each(['HEAD', 'TRACE', 'CONNECT'])('%s is none either', async (method) => {
    const socket = await door.connect();
    await socket.write(hidden().replace('POST', method));
    socket.end();
    for (const { status } of await socket.answersUntilClosed()) expect(status).toBe(404);
    expect(await storedReads(db)).toEqual([]);
  });

  test('OPTIONS is told what is', async () => {
    const socket = await door.connect();
    await socket.write(hidden().replace('POST', 'OPTIONS'));
    expect(await socket.answer()).toMatchObject({ status: 200, headers: { allow: 'POST' } });
    expect(await storedReads(db)).toEqual([]);
  });

  test.each([
    '/api/ingest/%',
    '/api/ingest/%zz',
    '/api/ingest/reads/..%2f',
    '/api/ingest/reads%00',
    '//api/ingest/reads',
    '/api/ingest/reads/more',
  ])('%s is no address', async (address) => {
    const socket = await door.connect();
    await socket.write(hidden().replace('/api/ingest/reads', address));
    const answer = await socket.answer();
    expect([400, 404]).toContain(answer?.status);
    expectProblem(answer!, answer!.status);
    expect(await storedReads(db)).toEqual([]);
  });

  test('an answer is not waited for: two requests in one go are two', async () => {
    const socket = await door.connect();
    await socket.write(hidden() + hidden());
    const answers = [await socket.answer(), await socket.answer()];
    const became = answers.flatMap((answer) => [answer?.body.accepted, answer?.body.duplicates]);
    // They are at work at the same time: either may be the first.
    expect(became.toSorted()).toEqual([0, 0, 1, 1]);
  });

  test('a request that waits to be asked for its body is asked', async () => {
    const socket = await door.connect();
    await socket.write(door.head(`Content-Length: ${body().length}`, 'Expect: 100-continue'));
    expect(await socket.answer()).toMatchObject({ status: 100 });
    await socket.write(body());
    expect(await socket.answer()).toMatchObject({ status: 200, body: { accepted: 1 } });
    await socket.write(door.head('Content-Length: 2', 'Expect: the moon'));
    expect(await socket.answer()).toMatchObject({ status: 417 });
  });
});
