import { describe, expect, test, vi } from 'vitest';
import { useTestDatabase } from '../support/database.js';
import { buildReader, storedReads } from '../support/ingest.js';
import type { RawSocket } from '../support/raw-socket.js';
import { expectProblem, useDoor } from '../support/use-door.js';

const db = useTestDatabase();
const BYTES = 1_000_000;
const limits = {
  requestsPerSecond: 20,
  readsPerSecond: 50,
  idleMs: 60_000,
  bytesUnderWay: BYTES,
  bytesUnderWayOfAll: 3 * BYTES,
};
const door = useDoor(db, { limits });
const reads = (count: number, from = 1) =>
  JSON.stringify({ reads: Array.from({ length: count }, (_, n) => door.read(from + n)) });

/** A reader of its own, so that the door's own reader has used nothing up. */
async function another() {
  const { token } = await buildReader(db);
  return {
    token,
    send: (body: string) => door.send(body).set('Authorization', `Bearer ${token}`),
    head: (...headers: string[]) => door.head(...headers).replace(door.token(), token),
  };
}

/** Starts a body that says it holds `says` bytes and sends `sent` of them. */
async function start(head: (...headers: string[]) => string, says: number, sent: number) {
  const socket = await door.connect();
  const begin = '{"reads":[],"filler":"';
  void socket.write(head(`Content-Length: ${says}`) + begin.padEnd(sent, 'x'));
  return socket;
}

/** Answers of those that were answered by the time that `count` of them were. */
async function answersOf(sockets: RawSocket[], count: number) {
  const answers: NonNullable<Awaited<ReturnType<RawSocket['answer']>>>[] = [];
  for (const socket of sockets) {
    void socket.answer().then((answer) => answer && answers.push(answer));
  }
  await vi.waitFor(() => expect(answers.length).toBeGreaterThanOrEqual(count), 30_000);
  return answers;
}

const each = <T>(count: number, act: (n: number) => Promise<T>) =>
  Promise.all(Array.from({ length: count }, (_, n) => act(n)));

describe('a token that sends too fast', () => {
  test('is told when to come again; nothing of it is taken, others are', async () => {
    const hasty = await another();
    const body = reads(1);
    const sockets = await each(80, () => door.connect());
    for (const socket of sockets)
      void socket.write(hasty.head(`Content-Length: ${body.length}`) + body);
    const answers = await answersOf(sockets, 80);
    const refused = answers.filter(({ status }) => status !== 200);
    expect(refused.length).toBeGreaterThan(0);
    for (const answer of refused) {
      expectProblem(answer, 429);
      expect(answer.headers['retry-after']).toBe('1');
    }
    expect((await door.send(reads(1))).body).toMatchObject({ accepted: 1 });
  });

  test('is told before its body is looked at', async () => {
    const hasty = await another();
    const sockets = await each(80, () => start(hasty.head, 500_000, 100));
    for (const answer of await answersOf(sockets, 1)) expectProblem(answer, 429);
  });

  test('is taken again once it has waited', async () => {
    const hasty = await another();
    await Promise.all(Array.from({ length: 25 }, () => hasty.send('{"reads":[]}')));
    await vi.waitFor(
      async () => expect((await hasty.send(reads(2))).body).toMatchObject({ accepted: 2 }),
      { timeout: 30_000, interval: 100 },
    );
  });

  test('with too many reads a second loses none that it sends again', async () => {
    const hasty = await another();
    const bodies = Array.from({ length: 4 }, (_, n) => reads(30, 100 * n + 1));
    const statuses = new Set<number>();
    for (const body of bodies) {
      await vi.waitFor(
        async () => {
          const { status } = await hasty.send(body);
          statuses.add(status);
          expect(status).toBe(200);
        },
        { timeout: 30_000, interval: 100 },
      );
    }
    statuses.delete(429);
    expect([...statuses]).toEqual([200]);
    expect(await storedReads(db)).toHaveLength(120);
  });
});

describe('a hundred slow bodies at once', () => {
  test('of one token hold no more than it may have under way', async () => {
    const slow = await another();
    const sockets: RawSocket[] = [];
    for (let n = 0; n < 20; n += 1) sockets.push(await start(slow.head, 500_000, 100_000));
    const refused = await answersOf(sockets, 10);
    for (const answer of refused) {
      expectProblem(answer, 429);
      expect(answer.headers['retry-after']).toBe('1');
    }
    expect((await door.send(reads(1))).body).toMatchObject({ accepted: 1 });
    for (const socket of sockets) socket.destroy();
    await vi.waitFor(
      async () =>
        expect((await slow.send(`{"reads":[],"x":"${'x'.repeat(950_000)}"}`)).status).toBe(200),
      { timeout: 30_000, interval: 100 },
    );
  });

  test('of many tokens hold no more than all may have under way', async () => {
    const readers = await each(10, another);
    const sockets = await each(100, (n) => start(readers[n % 10]!.head, 90_000, 80_000));
    const refused = await answersOf(sockets, 63);
    for (const answer of refused) {
      expectProblem(answer, 503);
      expect(answer.headers['retry-after']).toBe('2');
    }
    expect(refused.length).toBeLessThan(100);
    for (const socket of sockets) socket.destroy();
    await vi.waitFor(async () => expect((await readers[0]!.send(reads(1))).status).toBe(200), {
      timeout: 30_000,
      interval: 100,
    });
  });

  test('that have sent little hold little: all of them are taken', async () => {
    const readers = await each(10, another);
    const body = reads(1).replace('{', `{"filler":"${'x'.repeat(200_000)}",`);
    const head = `Content-Length: ${body.length}`;
    const sockets = await each(100, async (n) => {
      const socket = await door.connect();
      await socket.write(readers[n % 10]!.head(head) + body.slice(0, 1_000));
      return socket;
    });
    const statuses: (number | undefined)[] = [];
    for (const socket of sockets) {
      void socket.write(body.slice(1_000));
      statuses.push((await socket.answer())?.status);
    }
    expect(new Set(statuses)).toEqual(new Set([200]));
    expect(await storedReads(db)).toHaveLength(10);
  });
});
