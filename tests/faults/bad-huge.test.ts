import { gzipSync } from 'node:zlib';
import { describe, expect, test } from 'vitest';
import { INGEST_BOUNDS } from '../../server/contract/ingest.js';
import { useTestDatabase } from '../support/database.js';
import { storedReads } from '../support/ingest.js';
import { expectProblem, useDoor } from '../support/use-door.js';

const db = useTestDatabase();
const door = useDoor(db);
const chunk = (text: string) => `${text.length.toString(16)}\r\n${text}\r\n`;

/** A good body of exactly so many bytes. */
const bodyOf = (bytes: number) => {
  const body = JSON.stringify({ reads: [door.read()], filler: '' });
  return body.replace('""', `"${'x'.repeat(bytes - body.length)}"`);
};

describe('two megabytes', () => {
  test('are taken, and not one byte more', async () => {
    const answer = await door.send(bodyOf(INGEST_BOUNDS.bytes)).expect(200);
    expect(answer.body).toMatchObject({ accepted: 1 });
    const refused = await door.send(bodyOf(INGEST_BOUNDS.bytes + 1));
    expectProblem(refused, 413);
    expect(refused.body).toMatchObject({ detail: 'A request holds at most 2 MB here.' });
    expect(await storedReads(db)).toHaveLength(1);
  });

  test('are counted as they come where no length is given', async () => {
    const socket = await door.connect();
    const body = bodyOf(INGEST_BOUNDS.bytes);
    const halves = [body.slice(0, 1e6), body.slice(1e6)];
    await socket.write(door.head('Transfer-Encoding: chunked'));
    for (const half of halves) await socket.write(chunk(half));
    await socket.write('0\r\n\r\n');
    expect(await socket.answer()).toMatchObject({ status: 200, body: { accepted: 1 } });
    await socket.write(door.head('Transfer-Encoding: chunked'));
    for (const half of halves) await socket.write(chunk(half));
    await socket.write(chunk(' '));
    expectProblem((await socket.answer())!, 413);
    await socket.write('0\r\n\r\n');
    expect(await storedReads(db)).toHaveLength(1);
  });

  test('are refused by their head alone, before any of them comes', async () => {
    const socket = await door.connect();
    await socket.write(door.head(`Content-Length: ${INGEST_BOUNDS.bytes + 1}`));
    expectProblem((await socket.answer())!, 413);
    const beyondCounting = await door.connect();
    await beyondCounting.write(door.head(`Content-Length: ${'9'.repeat(18)}`));
    expectProblem((await beyondCounting.answer())!, 413);
  });

  test('that never end are refused once, and the sender may go on for nothing', async () => {
    const socket = await door.connect();
    await socket.write(door.head('Transfer-Encoding: chunked'));
    const piece = chunk('x'.repeat(500_000));
    for (let sent = 0; sent < 6; sent += 1) await socket.write(piece);
    expectProblem((await socket.answer())!, 413);
    for (let sent = 0; sent < 6; sent += 1) await socket.write(piece);
    await socket.write('0\r\n\r\n');
    const next = JSON.stringify({ reads: [door.read()] });
    await socket.write(`${door.head(`Content-Length: ${next.length}`)}${next}`);
    expect(await socket.answer()).toMatchObject({ status: 200, body: { accepted: 1 } });
  });
});

describe('5,000 reads', () => {
  const reads = (count: number) => Array.from({ length: count }, (_, n) => door.read(n + 1));

  test('are taken, and not one read more', async () => {
    const answer = await door.send(JSON.stringify({ reads: reads(5_000) })).expect(200);
    expect(answer.body).toMatchObject({ accepted: 5_000 });
    expectProblem(await door.send(JSON.stringify({ reads: reads(5_001) })), 413);
    expect(await storedReads(db)).toHaveLength(5_000);
  });

  test('are counted by lines too, empty ones aside', async () => {
    const lines = (count: number) => reads(count).map((read) => JSON.stringify(read));
    const type = 'application/x-ndjson';
    const answer = await door.send(lines(5_000).join('\n\n'), type).expect(200);
    expect(answer.body).toMatchObject({ accepted: 5_000 });
    expectProblem(await door.send(lines(5_001).join('\n'), type), 413);
    expect(await storedReads(db)).toHaveLength(5_000);
  });

  test.each([
    ['a million zeros', `{"reads":[0${',0'.repeat(1_000_000)}]}`, 413, 'application/json'],
    ['a million lines', '0\n'.repeat(1_000_000), 413, 'application/x-ndjson'],
    ['two million empty lines', '\n'.repeat(2_000_000), 200, 'application/x-ndjson'],
    ['a text of two million letters', `"${'x'.repeat(2_000_000)}"`, 400, 'application/json'],
    ['one line of two million letters', `"${'x'.repeat(2_000_000)}"`, 200, 'application/x-ndjson'],
    [
      'a number of two million digits',
      `{"reads":[${'9'.repeat(2_000_000)}]}`,
      200,
      'application/json',
    ],
  ])('%s', async (_what, body, status, type) => {
    const answer = await door.send(body, type);
    if (status === 200) expect(answer.status).toBe(200);
    else expectProblem(answer, status);
    expect(await storedReads(db)).toEqual([]);
  });
});

describe('a body that grows when it is unpacked', () => {
  test.each(['gzip', 'deflate', 'br', 'GZIP', 'identity, gzip', 'zstd'])(
    'is refused packed: %s',
    async (encoding) => {
      const bomb = gzipSync(Buffer.alloc(50_000_000, 'x'));
      expect(bomb.length).toBeLessThan(INGEST_BOUNDS.bytes);
      expectProblem(await door.send(bomb).set('Content-Encoding', encoding), 415);
    },
  );

  test('is no JSON when nobody says that it is packed', async () => {
    expectProblem(await door.send(gzipSync(JSON.stringify({ reads: [door.read()] }))), 400);
    expect(await storedReads(db)).toEqual([]);
  });

  test('is not unpacked in transfer either', async () => {
    const socket = await door.connect();
    await socket.write(`${door.head('Transfer-Encoding: gzip, chunked')}${chunk('x')}0\r\n\r\n`);
    const answer = await socket.answer();
    expect([400, 415, 501]).toContain(answer?.status);
  });
});
