import { beforeEach, expect, test, vi } from 'vitest';
import { ingestReads } from '../../server/ingest/ingest-reads.js';
import { monthStart } from '../../server/lib/month-start.js';
import { readsPartitions } from '../../server/queries/reads-partitions.js';
import { makePartitions } from '../../server/services/make-partitions.js';
import { retireMonth } from '../../server/services/retire-month.js';
import { buildContext } from '../support/context.js';
import { buildReader, carTag, storedReads } from '../support/ingest.js';
import { useOwnDatabase } from '../support/own-database.js';

const db = await useOwnDatabase('fishplate_partitions');
const hasty = { tries: 1, pauseMs: 0 };
const context = buildContext(db);
let ahead = 12;

const names = async () => (await readsPartitions(db)).map(({ name }) => name);
const nameOf = (month: Date) => `p${month.toISOString().slice(0, 7).replace('-', '')}`;
async function send(readAt: Date, number = 1): Promise<void> {
  const { site } = await buildReader(db);
  const answer = await ingestReads(db, {
    site: { id: site.id, code: site.code },
    reads: [{ antenna: 1, tag: carTag(number), readAt: readAt.toISOString() }],
    receivedAt: context.clock.now(),
  });
  expect(answer.rejected).toBe(0);
}

// Each test takes the clock further: the partitions stay.
beforeEach(async () => {
  context.clock.set(monthStart(new Date(), (ahead += 2) - 12));
  await db.pool.query('DELETE FROM `reads`');
});

test('what is set aside as too old stays until the month turns', async () => {
  const first = (await readsPartitions(db))[0];
  context.clock.set(new Date());
  await send(monthStart(context.clock.now(), -20));
  expect(await retireMonth(context, hasty)).toBe('none');
  expect(await storedReads(db)).toMatchObject([{ hold_code: 'too-old' }]);
  context.clock.set(new Date(monthStart(new Date(), 1).getTime() + 2 * 3_600_000));
  expect(await retireMonth(context, hasty)).toBe('dropped');
  expect(await storedReads(db)).toEqual([]);
  expect((await readsPartitions(db)).map(({ name }) => name)).not.toContain(first?.name);
});

test('twelve months ahead have a partition of their own, once, in order', async () => {
  expect(await makePartitions(context, hasty)).toBe('made');
  const made = await names();
  expect(made.at(-1)).toBe('pmax');
  expect(made.at(-2)).toBe(nameOf(monthStart(context.clock.now(), 12)));
  expect(new Set(made).size).toBe(made.length);
  const bounds = (await readsPartitions(db)).map(({ before }) => before?.getTime() ?? Infinity);
  expect(bounds).toEqual([...bounds].sort((a, b) => a - b));
  expect(await makePartitions(context, hasty)).toBe('there');
  expect(await names()).toEqual(made);
});

test('two servers at once make each month once', async () => {
  const before = await names();
  const both = await Promise.all([makePartitions(context), makePartitions(context)]);
  expect(both).toContain('made');
  const after = await names();
  expect(new Set(after).size).toBe(after.length);
  expect(after.length).toBe(before.length + 2);
});

test('reads that lie that far ahead move into their month, and nothing is lost', async () => {
  const last = (await readsPartitions(db)).at(-2)?.before as Date;
  const far = [new Date(last.getTime() + 1), monthStart(last, 1), monthStart(last, 300)];
  for (const at of far) await send(at);
  expect(await makePartitions(context, hasty)).toBe('made');
  const kept = await storedReads(db);
  expect(kept.map((row) => row.read_at).sort((a, b) => +a - +b)).toEqual(far);
  const [inMonth] = await db.pool.query<{ count: number }[]>(
    `SELECT COUNT(*) AS count FROM \`reads\` PARTITION (${nameOf(last)})`,
  );
  expect(inMonth?.count).toBe(1);
});

test('very many of them are left where they are, and the log says so', async () => {
  const before = await names();
  const last = (await readsPartitions(db)).at(-2)?.before as Date;
  await db.pool.query(
    `INSERT INTO \`reads\` (batch_id, seq, site_id, antenna_no, tag, read_at, config_version,
       received_at)
     SELECT seq, 0, 1, 1, 'x', ? + INTERVAL seq SECOND, 1, NOW() FROM seq_1_to_50001`,
    [last],
  );
  const logged = vi.spyOn(context.logger, 'error');
  expect(await makePartitions(context, hasty)).toBe('crowded');
  expect(logged).toHaveBeenCalledOnce();
  logged.mockRestore();
  expect(await names()).toEqual(before);
});

test('an open reader holds it up for a second at most, and ingest goes on', async () => {
  const reader = await db.pool.getConnection();
  try {
    await reader.beginTransaction();
    await reader.query('SELECT COUNT(*) FROM `reads`');
    const making = makePartitions(context, hasty);
    await send(context.clock.now());
    expect(await making).toBe('blocked');
    await send(context.clock.now(), 2);
    expect(await storedReads(db)).toHaveLength(2);
  } finally {
    await reader.rollback();
    await reader.release();
  }
  expect(await makePartitions(context, hasty)).toBe('made');
});
