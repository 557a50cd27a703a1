import { once } from 'node:events';
import type { ServerResponse } from 'node:http';
import { describe, expect, test, vi } from 'vitest';
import { defaultIngestLimits } from '../../server/ingest/limits.js';
import { useTestDatabase } from '../support/database.js';
import { storedReads } from '../support/ingest.js';
import { expectProblem, useDoor } from '../support/use-door.js';

const db = useTestDatabase();
const door = useDoor(db, { limits: { idleMs: 150 } });
const goodBody = () => JSON.stringify({ reads: [door.read(1), door.read(2), door.read(3)] });
const length = (body: string) => `Content-Length: ${Buffer.byteLength(body)}`;

/** What the server says to the next request, and that it is done with it. */
async function nextRequest(): Promise<{ over: Promise<unknown> }> {
  const [, response] = (await once(door.server(), 'request')) as [unknown, ServerResponse];
  return { over: once(response, 'close') };
}

describe('a body that breaks off', () => {
  test.each([0, 1, 11, 60, 150])('after %i bytes stores nothing', async (bytes) => {
    const body = goodBody();
    const socket = await door.connect();
    const [{ over }] = await Promise.all([
      nextRequest(),
      socket.write(door.head(length(body)) + body.slice(0, bytes)),
    ]);
    socket.destroy();
    await over;
    expect(await storedReads(db)).toEqual([]);
  });

  test('one byte before its end stores nothing; sent again it is new', async () => {
    const body = goodBody();
    const socket = await door.connect();
    const [{ over }] = await Promise.all([
      nextRequest(),
      socket.write(door.head(length(body)) + body.slice(0, -1)),
    ]);
    socket.destroy();
    await over;
    const answer = await door.send(body).expect(200);
    expect(answer.body).toMatchObject({ accepted: 3, duplicates: 0 });
  });

  test('and says that it is whole is no JSON', async () => {
    const body = goodBody();
    for (const bytes of [1, 10, body.length / 2, body.length - 1]) {
      expectProblem(await door.send(body.slice(0, bytes)), 400);
    }
    expect(await storedReads(db)).toEqual([]);
  });

  test('within a line spoils that line alone', async () => {
    const lines = [1, 2, 3].map((number) => JSON.stringify(door.read(number))).join('\n');
    const answer = await door.send(lines.slice(0, -9), 'application/x-ndjson').expect(200);
    expect(answer.body).toMatchObject({
      accepted: 2,
      rejected: 1,
      problems: [{ index: 2, code: 'not-json' }],
    });
  });

  test('in twenty connections at once harms none of the others', async () => {
    const body = goodBody();
    const sockets = await Promise.all(Array.from({ length: 20 }, () => door.connect()));
    await Promise.all(sockets.map((socket) => socket.write(door.head(length(body)) + '{"reads"')));
    const answer = door.send(body).expect(200);
    for (const socket of sockets) socket.destroy();
    expect((await answer).body).toMatchObject({ accepted: 3 });
  });
});

describe('a sender that hangs up after its body', () => {
  test('has its reads taken all the same: sent again they are duplicates', async () => {
    const body = goodBody();
    const socket = await door.connect();
    await Promise.all([nextRequest(), socket.write(door.head(length(body)) + body)]);
    socket.destroy();
    await vi.waitFor(async () => expect(await storedReads(db)).toHaveLength(3), 10_000);
    const answer = await door.send(body).expect(200);
    expect(answer.body).toMatchObject({ accepted: 0, duplicates: 3 });
  });
});

describe('a sender that falls silent', () => {
  test('for ten seconds is enough, unless the settings say otherwise', () => {
    expect(defaultIngestLimits.idleMs).toBe(10_000);
  });

  test.each([
    ['before the first byte', ''],
    ['within the body', '{"reads": ['],
  ])('%s is answered 408, and the connection ends', async (_when, start) => {
    const socket = await door.connect();
    await socket.write(door.head('Content-Length: 500') + start);
    const [answer, ...others] = await socket.answersUntilClosed();
    expectProblem(answer!, 408);
    expect(answer?.headers.connection).toBe('close');
    expect(others).toEqual([]);
    expect(await storedReads(db)).toEqual([]);
  });

  test('on the wheel door is answered alike', async () => {
    const socket = await door.connect();
    await socket.write(door.head('Content-Length: 500').replace('reads', 'wheels'));
    expectProblem((await socket.answer())!, 408);
  });
});
