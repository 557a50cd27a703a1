import { randomBytes } from 'node:crypto';
import { describe, expect, test, vi } from 'vitest';
import { replaceReaderToken } from '../../server/services/replace-reader-token.js';
import { useTestDatabase } from '../support/database.js';
import { buildReader, storedReads } from '../support/ingest.js';
import { expectProblem, useDoor } from '../support/use-door.js';

const db = useTestDatabase();
const door = useDoor(db);
const body = () => JSON.stringify({ reads: [door.read()] });

/** The head of a request with other credentials than the door's own reader. */
const headWith = (...credentials: string[]) =>
  door
    .head(`Content-Length: ${body().length}`)
    .replace(
      /Authorization: .*\r\n/,
      credentials.map((value) => `Authorization: ${value}\r\n`).join(''),
    );

describe('credentials that are none', () => {
  test.each([
    ['none', () => []],
    ['nothing', () => ['']],
    ['no token', () => ['Bearer']],
    ['an empty token', () => ['Bearer  ']],
    ['another scheme', () => [`Basic ${door.token()}`]],
    ['no scheme', () => [door.token()]],
    ['a token that nobody has', () => [`Bearer ${randomBytes(32).toString('base64url')}`]],
    ['a token cut short', () => [`Bearer ${door.token().slice(0, -1)}`]],
    ['a token with more behind it', () => [`Bearer ${door.token()}=`]],
    ['a token in the wrong case', () => [`Bearer ${flipCase(door.token())}`]],
    ['a token in quotes', () => [`Bearer "${door.token()}"`]],
    ['a token in two parts', () => [`Bearer ${door.token().slice(0, 9)} ${door.token().slice(9)}`]],
    ['two tokens', () => [`Bearer ${door.token()}, Bearer ${door.token()}`]],
    ['a scheme after another', () => [`Bearer Bearer ${door.token()}`]],
    ['a statement for the database', () => ["Bearer '--"]],
    ['letters beyond ASCII', () => ['Bearer \xe9\xff']],
    ['a token of ten thousand letters', () => [`Bearer ${'x'.repeat(10_000)}`]],
  ])('%s', async (_what, credentials) => {
    const socket = await door.connect();
    await socket.write(Buffer.from(headWith(...credentials()) + body(), 'latin1'));
    const answer = await socket.answer();
    expectProblem(answer!, 401);
    expect(answer?.headers['www-authenticate']).toBe('Bearer');
    expect(JSON.stringify(answer?.body)).not.toContain(door.token());
    expect(await storedReads(db)).toEqual([]);
  });

  test('are refused before the body is asked for', async () => {
    const socket = await door.connect();
    await socket.write(headWith('Bearer wrong'));
    expectProblem((await socket.answer())!, 401);
  });

  test('in a second header do not count beside the first', async () => {
    const socket = await door.connect();
    await socket.write(headWith('Bearer wrong', `Bearer ${door.token()}`) + body());
    expectProblem((await socket.answer())!, 401);
    expect(await storedReads(db)).toEqual([]);
  });

  test('too long for a head are refused before anybody looks at them', async () => {
    const socket = await door.connect();
    await socket.write(headWith(`Bearer ${'x'.repeat(20_000)}`));
    expect((await socket.answersUntilClosed()).map(({ status }) => status)).toEqual([431]);
  });
});

test('the scheme may be written in any case', async () => {
  for (const scheme of ['bearer', 'BEARER', 'Bearer ']) {
    const socket = await door.connect();
    await socket.write(headWith(`${scheme} ${door.token()}`) + body());
    expect((await socket.answer())?.status).toBe(200);
  }
});

describe('a token that is replaced', () => {
  test('is refused from then on; the new one is taken', async () => {
    const { site, token } = await buildReader(db);
    const fresh = await replaceReaderToken(door.context, site.id);
    const send = (credentials: string) =>
      door.send(body()).set('Authorization', `Bearer ${credentials}`);
    expectProblem(await send(token), 401);
    expect((await send(fresh)).body).toMatchObject({ accepted: 1 });
  });

  test.each([
    ['reads', 'application/json', () => body()],
    ['reads', 'application/x-ndjson', () => JSON.stringify(door.read())],
    ['wheels', 'application/json', () => '{"readPoint":"A","axles":4}'],
  ])('while its body is under way takes nothing in: %s as %s', async (path, type, text) => {
    const { site, token } = await buildReader(db);
    const sent = text();
    const head = door
      .head(`Content-Length: ${sent.length}`)
      .replace(door.token(), token)
      .replace('ingest/reads', `ingest/${path}`)
      .replace('application/json', type);
    const lookUps = vi.spyOn(db.pool, 'query');
    const socket = await door.connect();
    await socket.write(head + sent.slice(0, 12));
    await vi.waitFor(() => expect(lookUps.mock.settledResults[0]?.type).toBe('fulfilled'));
    lookUps.mockRestore();
    await replaceReaderToken(door.context, site.id);
    await socket.write(sent.slice(12));
    expectProblem((await socket.answer())!, 401);
    expect(await storedReads(db)).toEqual([]);
  });

  test('while nothing else happens is no hindrance to others', async () => {
    const { site } = await buildReader(db);
    const socket = await door.connect();
    const text = body();
    await socket.write(door.head(`Content-Length: ${text.length}`) + text.slice(0, 12));
    await replaceReaderToken(door.context, site.id);
    await socket.write(text.slice(12));
    expect(await socket.answer()).toMatchObject({ status: 200, body: { accepted: 1 } });
  });
});

function flipCase(text: string): string {
  return text.replace(/[a-z]/i, (letter) =>
    letter === letter.toLowerCase() ? letter.toUpperCase() : letter.toLowerCase(),
  );
}
