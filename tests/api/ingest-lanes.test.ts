import { describe, expect, test } from 'vitest';
import { LANES, LATE_AFTER_MS, MOST_LATE_READS } from '../../server/domain/lanes.js';
import { buildClock, buildContext } from '../support/context.js';
import { useTestDatabase } from '../support/database.js';
import { buildIngestApp, buildReader, carTag, postReads, storedReads } from '../support/ingest.js';
import { SeededRandom } from '../support/seeded-random.js';

const db = useTestDatabase();
const clock = buildClock('2026-12-01T12:00:00.000Z');
const app = buildIngestApp(buildContext(db, { clock }));

/** An instant this long before the clock (ms). */
const before = (ms: number) => new Date(clock.now().getTime() - ms).toISOString();
const read = (number: number, age: number) => ({
  antenna: 1,
  tag: carTag(number),
  readAt: before(age),
});
const liveReads = (count: number) => Array.from({ length: count }, (_, n) => read(n + 1, n * 10));
const lateReads = (count: number) =>
  Array.from({ length: count }, (_, n) => read(n + 1, LATE_AFTER_MS + 1 + n * 10));

const send = async (token: string, reads: object[]) => {
  const { body } = await postReads(app, token, { reads }).expect(200);
  return body as { accepted: number; duplicates: number; held: number; rejected: number };
};

/** Each batch that waits: its lane, what its row of `work` says, and its reads. */
async function batches() {
  const rows = await db.pool.query<{ id: number; lane: number; read_count: number }[]>(
    'SELECT id, lane, read_count FROM work ORDER BY id',
  );
  const stored = await storedReads(db);
  return rows.map(({ id, lane, read_count: count }) => ({
    lane,
    count,
    reads: stored.filter(({ batch_id: batchId }) => batchId === id),
  }));
}

describe('reads of one request', () => {
  test('that are all live are one batch; a quarter of an hour is not late yet', async () => {
    const { token } = await buildReader(db);
    const reads = [read(1, 0), read(2, LATE_AFTER_MS), read(3, -LATE_AFTER_MS)];
    expect(await send(token, reads)).toMatchObject({ accepted: 2, held: 1 });
    expect(await batches()).toMatchObject([
      { lane: LANES.live, count: 3, reads: [{ seq: 0 }, { seq: 1 }, { seq: 2 }] },
    ]);
  });

  test('go by lane, each with its place in the request', async () => {
    const { token } = await buildReader(db);
    const reads = [read(1, LATE_AFTER_MS + 1), read(2, 0), 'no read', read(3, 1e9), read(4, 5)];
    expect(await send(token, reads as object[])).toMatchObject({ accepted: 4, rejected: 1 });
    expect(await batches()).toMatchObject([
      { lane: LANES.live, count: 2, reads: [{ seq: 1 }, { seq: 4 }] },
      { lane: LANES.late, count: 2, reads: [{ seq: 0 }, { seq: 3 }] },
    ]);
  });

  test('that are late lie in batches of bounded size, each a stretch of time', async () => {
    const { token } = await buildReader(db);
    const reads = new SeededRandom(1).shuffled([...lateReads(2_500), ...liveReads(100)]);
    expect(await send(token, reads)).toMatchObject({ accepted: 2_600, duplicates: 0, held: 0 });
    const [live, ...late] = await batches();
    expect(live).toMatchObject({ lane: LANES.live, count: 100 });
    expect(late.map(({ lane, count }) => [lane, count])).toEqual([
      [LANES.late, MOST_LATE_READS],
      [LANES.late, MOST_LATE_READS],
      [LANES.late, 500],
    ]);
    const spans = late.map((batch) => batch.reads.map((row) => row.read_at.getTime()));
    expect(spans.map((span) => span.length)).toEqual([1_000, 1_000, 500]);
    for (const [index, span] of spans.entries()) {
      expect(Math.max(...span)).toBeLessThan(Math.min(...(spans[index + 1] ?? [Infinity])));
    }
  });

  test('are all answered as they are: new, repeated, set aside, rejected', async () => {
    const { token } = await buildReader(db);
    await send(token, [read(1, 0), read(2, LATE_AFTER_MS + 1)]);
    const tooOld = { ...read(9, 0), readAt: '1999-01-01T00:00:00Z' };
    const reads = [
      read(2, LATE_AFTER_MS + 1),
      { ...read(5, 1e7), antenna: 7 },
      read(1, 0),
      { ...read(6, 0), tag: 'NO READ' },
      tooOld,
      read(7, 1e7),
      read(7, 1e7),
      { antenna: 1 },
    ];
    const { body } = await postReads(app, token, { reads }).expect(200);
    expect(body).toMatchObject({
      accepted: 1,
      duplicates: 3,
      held: 3,
      rejected: 1,
      problems: [
        { index: 1, code: 'unknown-antenna' },
        { index: 3, code: 'undecodable-tag' },
        { index: 4, code: 'too-old' },
        { index: 7, code: 'missing-tag' },
      ],
    });
    const [, , live, late] = await batches();
    expect(live).toMatchObject({ lane: LANES.live, count: 1, reads: [{ seq: 3 }] });
    expect(late).toMatchObject({
      lane: LANES.late,
      count: 3,
      reads: [{ seq: 1 }, { seq: 4 }, { seq: 5 }],
    });
    const held = await db.pool.query<object[]>('SELECT batch_id, seq FROM held ORDER BY seq');
    const aside = (await storedReads(db)).filter((row) => row.hold_code !== null);
    expect(held).toHaveLength(3);
    expect(held).toEqual(
      aside.map((row) => ({ batch_id: row.batch_id, seq: row.seq })).sort((a, b) => a.seq - b.seq),
    );
  });
});

describe('a request that comes again', () => {
  const first = [...lateReads(2_100), ...liveReads(5)];

  test('leaves nothing behind', async () => {
    const { token } = await buildReader(db);
    await send(token, first);
    const stored = await batches();
    expect(await send(token, first.toReversed())).toMatchObject({ accepted: 0, duplicates: 2_105 });
    expect(await batches()).toEqual(stored);
  });

  test('leaves only the batches in which something was new', async () => {
    const { token } = await buildReader(db);
    await send(token, first);
    const older = read(5_000, LATE_AFTER_MS + 1e7);
    expect(await send(token, [...first, older])).toMatchObject({ accepted: 1, duplicates: 2_105 });
    const added = (await batches()).slice(4);
    expect(added).toMatchObject([{ lane: LANES.late, count: 1, reads: [{ seq: 2_105 }] }]);
  });

  test('later, when what was live has become late, is the same read still', async () => {
    const { token } = await buildReader(db);
    const reads = liveReads(10);
    await send(token, reads);
    clock.advance(3_600_000);
    const again = await send(token, reads);
    clock.advance(-3_600_000);
    expect(again).toMatchObject({ accepted: 0, duplicates: 10 });
    expect(await batches()).toMatchObject([{ lane: LANES.live, count: 10 }]);
  });
});

test('eight clients with overlapping histories at once store each read once', async () => {
  const { token } = await buildReader(db);
  const all = [...lateReads(1_500), ...liveReads(50)];
  const random = new SeededRandom(8);
  const answers = await Promise.all(
    Array.from({ length: 8 }, () => send(token, random.shuffled(all).slice(0, 1_400))),
  );
  const accepted = answers.reduce((sum, answer) => sum + answer.accepted, 0);
  const stored = await storedReads(db);
  expect(stored).toHaveLength(accepted);
  expect(new Set(stored.map((row) => `${row.tag} ${row.read_at.getTime()}`)).size).toBe(accepted);
  for (const { count, reads } of await batches()) expect(reads).toHaveLength(count);
});
