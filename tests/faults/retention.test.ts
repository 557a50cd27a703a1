import { beforeEach, describe, expect, test, vi } from 'vitest';
import { ingestReads } from '../../server/ingest/ingest-reads.js';
import { keepMonths } from '../../server/jobs/keep-months.js';
import { monthStart } from '../../server/lib/month-start.js';
import type { ReadPoint } from '../../server/models/read-point.js';
import type { Site } from '../../server/models/site.js';
import { createProjector } from '../../server/projections/projector.js';
import { readsPartitions } from '../../server/queries/reads-partitions.js';
import { planRebuild } from '../../server/services/plan-rebuild.js';
import { makePartitions } from '../../server/services/make-partitions.js';
import { retireMonth } from '../../server/services/retire-month.js';
import { buildContext } from '../support/context.js';
import { buildAntenna, buildReadPoint, buildSite } from '../support/factories.js';
import { carTag, storedReads } from '../support/ingest.js';
import { useOwnDatabase } from '../support/own-database.js';

const db = await useOwnDatabase('fishplate_retention');
const hasty = { tries: 1, pauseMs: 0 };
const context = buildContext(db, { env: { retainMonths: 2 } });
const CARS = 6;
/** Each test drops a month of its own: what is dropped does not come back. */
let month = monthStart(new Date(), 20);
let cut: Date;
let site: Site;
let point: ReadPoint;

beforeEach(async () => {
  month = monthStart(month, 4);
  cut = monthStart(month, 1);
  for (const table of ['work', '`reads`', 'held', 'releases', 'rebuild_spans', 'rebuilds']) {
    await db.pool.query(`DELETE FROM ${table}`);
  }
  for (const table of ['passages', 'passes', 'stays', 'legs', 'last_seen', 'unit_folds']) {
    await db.pool.query(`DELETE FROM ${table}`);
  }
  context.clock.set(month);
  await makePartitions(context);
  await dropAllBefore(month);
  site = await buildSite(db);
  point = await buildReadPoint(db, { site });
  for (const [number, offsetM] of [
    [1, -3],
    [2, 3],
  ] as const) {
    await buildAntenna(db, { readPoint: point, number, offsetM });
  }
  await db.pool.query('UPDATE config_state SET version = version + 1');
  context.clock.set(new Date(cut.getTime() + 60_000));
});

/** So that `month` is the oldest that there is. */
async function dropAllBefore(before: Date): Promise<void> {
  context.clock.set(new Date(monthStart(before, 2).getTime() + 2 * 3_600_000));
  while ((await retireMonth(context)) === 'dropped');
  expect((await readsPartitions(db))[0]?.before).toEqual(monthStart(before, 1));
}

const nextTurn = () => context.clock.set(new Date(monthStart(cut, 2).getTime() + 2 * 3_600_000));
const seconds = (count: number) => new Date(cut.getTime() + count * 1000);

/** A train whose cars follow each other by `apart` seconds, the first `from` seconds after the cut. */
async function sendTrain(from: number, apart = 1, first = 1): Promise<void> {
  const reads = Array.from({ length: CARS }, (_, index) => index).flatMap((index) =>
    [1, 2].map((antenna) => ({
      antenna,
      tag: carTag(first + index),
      readAt: seconds(from + index * apart + antenna * 0.4).toISOString(),
    })),
  );
  const { accepted } = await send(reads);
  expect(accepted).toBe(reads.length);
}

const send = (reads: object[]) =>
  ingestReads(db, {
    site: { id: site.id, code: site.code },
    reads,
    receivedAt: context.clock.now(),
    retainMonths: context.env.retainMonths,
  });

async function drain(): Promise<void> {
  const projector = createProjector(context);
  await projector.drain();
  await projector.stop();
}

/** Everything that is known of the past, row by row. */
async function history(): Promise<string[]> {
  const dumped: string[] = [];
  for (const table of ['passages', 'passes', 'stays', 'legs', 'last_seen']) {
    const rows = await db.pool.query<object[]>(`SELECT * FROM ${table}`);
    dumped.push(...rows.map((row) => `${table} ${JSON.stringify(row)}`));
  }
  return dumped.sort();
}

const frozenBefore = async () => {
  const [row] = await db.pool.query<{ frozen_before: Date | null }[]>(
    'SELECT frozen_before FROM config_state',
  );
  return row?.frozen_before ?? null;
};

describe('a month that is too old', () => {
  test('goes, cut through the middle of a pass, and history stays as it is', async () => {
    await sendTrain(-86_400, 1, 20);
    await sendTrain(-CARS / 2);
    await drain();
    const before = await history();
    expect(before.filter((row) => row.startsWith('passages'))).toHaveLength(2 * CARS);
    expect(before.filter((row) => row.startsWith('passes'))).toHaveLength(2);
    expect(await retireMonth(context, hasty)).toBe('none');
    nextTurn();
    expect(await retireMonth(context, hasty)).toBe('dropped');
    const left = await storedReads(db);
    expect(left).toHaveLength(CARS);
    expect(left.every((row) => row.read_at >= cut)).toBe(true);
    expect(await frozenBefore()).toEqual(cut);
    await drain();
    expect(await history()).toEqual(before);
    expect(await retireMonth(context, hasty)).toBe('none');
  });

  test('lets a late car join the train that the cut goes through', async () => {
    await sendTrain(-CARS / 2);
    await drain();
    nextTurn();
    expect(await retireMonth(context, hasty)).toBe('dropped');
    await send(
      [1, 2].map((antenna) => ({
        antenna,
        tag: carTag(99),
        readAt: seconds(CARS / 2 + antenna * 0.4).toISOString(),
      })),
    );
    await drain();
    const [pass, ...others] = await db.pool.query<{ started_at: Date; unit_count: number }[]>(
      'SELECT started_at, unit_count FROM passes',
    );
    expect(others).toEqual([]);
    expect(pass?.unit_count).toBe(CARS + 1);
    expect(pass?.started_at.getTime()).toBeLessThan(cut.getTime());
  });

  test('sets what comes later than that aside as too old, and keeps it for the month', async () => {
    await sendTrain(-CARS / 2);
    await drain();
    nextTurn();
    expect(await retireMonth(context, hasty)).toBe('dropped');
    const before = await history();
    const answer = await send([{ antenna: 1, tag: carTag(7), readAt: seconds(-60).toISOString() }]);
    expect(answer).toMatchObject({ accepted: 0, held: 1, problems: [{ code: 'too-old' }] });
    await drain();
    expect(await retireMonth(context, hasty)).toBe('none');
    const late = (await storedReads(db)).filter((row) => row.hold_code === 'too-old');
    expect(late).toHaveLength(1);
    expect(await history()).toEqual(before);
  });

  test('is not made anew: a rebuild of everything begins behind it', async () => {
    context.clock.set(seconds(7200));
    await sendTrain(-86_400, 1, 20);
    await sendTrain(-CARS / 2);
    await sendTrain(1800, 1, 40);
    await drain();
    const before = await history();
    nextTurn();
    expect(await retireMonth(context, hasty)).toBe('dropped');
    await db.pool.query('UPDATE passes SET speed_kmh = 1 WHERE started_at >= ?', [seconds(900)]);
    const spans = [{ readPointId: point.id, since: seconds(-100_000), until: seconds(100_000) }];
    const plan = { cause: 'command', label: 'all', requestedBy: null, spans } as const;
    await planRebuild(db.pool, plan);
    const planned = await db.pool.query('SELECT since_at FROM rebuild_spans');
    expect(planned).toEqual([{ since_at: cut }]);
    await drain();
    expect(await history()).toEqual(before);
    expect(await db.pool.query('SELECT state FROM rebuilds')).toEqual([{ state: 'done' }]);
  });

  test('has gone for good, even when more months are to be kept from then on', async () => {
    nextTurn();
    expect(await retireMonth(context, hasty)).toBe('dropped');
    const late = { antenna: 1, tag: carTag(7), readAt: seconds(-60).toISOString() };
    const answer = await ingestReads(db, {
      site: { id: site.id, code: site.code },
      reads: [late, { ...late, readAt: seconds(1).toISOString() }],
      receivedAt: context.clock.now(),
      retainMonths: 24,
    });
    expect(answer).toMatchObject({ accepted: 1, problems: [{ index: 0, code: 'too-old' }] });
  });

  test('takes what was set aside of it along, and leaves what is younger', async () => {
    await send([
      { antenna: 9, tag: carTag(1), readAt: seconds(-60).toISOString() },
      { antenna: 9, tag: carTag(1), readAt: seconds(30).toISOString() },
    ]);
    await drain();
    nextTurn();
    expect(await retireMonth(context, hasty)).toBe('dropped');
    const held = await db.pool.query<{ read_at: Date }[]>('SELECT read_at FROM held');
    expect(held.map((row) => row.read_at)).toEqual([seconds(30)]);
  });

  test('waits an hour for what may still be on its way', async () => {
    context.clock.set(new Date(monthStart(cut, 2).getTime() + 59 * 60_000));
    expect(await retireMonth(context, hasty)).toBe('none');
    expect(await frozenBefore()).not.toEqual(cut);
  });
});

describe('what is not folded yet', () => {
  test('keeps its month', async () => {
    await sendTrain(-CARS / 2);
    nextTurn();
    expect(await retireMonth(context, hasty)).toBe('waiting');
    expect(await storedReads(db)).toHaveLength(2 * CARS);
    expect(await frozenBefore()).not.toEqual(cut);
    await drain();
    expect(await retireMonth(context, hasty)).toBe('dropped');
  });

  test('keeps its month while it is being made anew; what somebody stopped is cut', async () => {
    await sendTrain(-CARS / 2);
    await drain();
    const id = await planRebuild(db.pool, {
      cause: 'command',
      label: 'one',
      requestedBy: null,
      spans: [{ readPointId: point.id, since: seconds(-3600), until: seconds(3600) }],
    });
    nextTurn();
    expect(await retireMonth(context, hasty)).toBe('waiting');
    await db.pool.query("UPDATE rebuilds SET state = 'stopped' WHERE id = ?", [id]);
    expect(await retireMonth(context, hasty)).toBe('dropped');
    const spans = await db.pool.query<{ since_at: Date; next_at: Date; done: number }[]>(
      'SELECT since_at, next_at, done FROM rebuild_spans',
    );
    expect(spans).toMatchObject([{ since_at: cut, next_at: cut, done: 0 }]);
  });
});

describe('cut off between any two steps', () => {
  test.each([0, 1, 2, 3, 4])('after statement %i, the next run ends it', async (count) => {
    await sendTrain(-CARS / 2);
    await send([{ antenna: 9, tag: carTag(1), readAt: seconds(-60).toISOString() }]);
    await drain();
    const before = await history();
    nextTurn();
    const wreck = cutOffAfter(count);
    await expect(retireMonth(context, hasty)).rejects.toThrow('the line was cut');
    wreck.mockRestore();
    expect(await storedReads(db)).toHaveLength(2 * CARS + 1);
    expect(await history()).toEqual(before);
    expect(await retireMonth(context, hasty)).toBe('dropped');
    expect((await storedReads(db)).every((row) => row.read_at >= cut)).toBe(true);
    expect(await frozenBefore()).toEqual(cut);
    expect(await history()).toEqual(before);
    expect(await db.pool.query('SELECT * FROM held')).toEqual([]);
  });

  /** The pool fails once it has been asked so often. */
  function cutOffAfter(count: number) {
    const ask = db.pool.query.bind(db.pool);
    let left = count;
    return vi.spyOn(db.pool, 'query').mockImplementation(((text: string, values: unknown) => {
      left -= 1;
      return left < 0 ? Promise.reject(new Error('the line was cut')) : ask(text, values);
    }) as typeof db.pool.query);
  }
});

test('two servers at once drop it once, and no month more', async () => {
  await sendTrain(-CARS / 2);
  await drain();
  const before = await history();
  nextTurn();
  const both = await Promise.all([keepMonths(context), keepMonths(context)]);
  expect(both.map(({ retired }) => retired)).toContain('dropped');
  expect(await storedReads(db)).toHaveLength(CARS);
  expect((await readsPartitions(db))[0]?.before).toEqual(monthStart(cut, 1));
  expect(await history()).toEqual(before);
});

test('an open reader keeps it, ingest goes on, and it is dropped the next time', async () => {
  await sendTrain(-CARS / 2);
  await drain();
  nextTurn();
  const logged = vi.spyOn(context.logger, 'warn');
  const reader = await db.pool.getConnection();
  try {
    await reader.beginTransaction();
    await reader.query('SELECT COUNT(*) FROM `reads`');
    const retiring = retireMonth(context, hasty);
    const live = { antenna: 1, tag: carTag(1), readAt: context.clock.now().toISOString() };
    expect((await send([live])).accepted).toBe(1);
    expect(await retiring).toBe('blocked');
    expect((await send([{ ...live, antenna: 2 }])).accepted).toBe(1);
  } finally {
    await reader.rollback();
    await reader.release();
  }
  expect(logged).toHaveBeenCalledOnce();
  logged.mockRestore();
  expect(await storedReads(db)).toHaveLength(2 * CARS + 2);
  expect(await retireMonth(context, hasty)).toBe('dropped');
  expect(await storedReads(db)).toHaveLength(CARS + 2);
});
