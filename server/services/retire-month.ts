import type { UpsertResult } from 'mariadb';
import type { Context } from '../lib/context.js';
import type { Database } from '../lib/database.js';
import { monthStart } from '../lib/month-start.js';
import { readsPartitions, type Partition } from '../queries/reads-partitions.js';
import { alterReads, type Patience } from './alter-reads.js';
import { freezeHistory } from './freeze-history.js';

/** `waiting`: something of the month is not folded yet; `blocked`: somebody reads the table. */
export type RetiredMonth = 'none' | 'dropped' | 'waiting' | 'blocked';

/** After the turn of a month a request that came in before it may still be on its way. */
const GRACE_MS = 60 * 60_000;
const ROWS_AT_ONCE = 5_000;

/**
 * Drops the reads of the oldest month that need no longer be kept, one month at a time. What was
 * made of them stays; from here on it is frozen. Each step finds by itself what an earlier run
 * that broke off has done, so it can be run again at any point.
 */
export async function retireMonth(
  context: Pick<Context, 'db' | 'clock' | 'logger' | 'env'>,
  patience?: Patience,
): Promise<RetiredMonth> {
  const { db, clock, logger, env } = context;
  const cut = monthStart(new Date(clock.now().getTime() - GRACE_MS), -env.retainMonths);
  const oldest = dueAt(cut, await readsPartitions(db));
  if (!oldest) return 'none';
  if (!(await freezeHistory(db, oldest.before))) return 'waiting';
  await forgetHeld(db, oldest.before);
  const change = `DROP PARTITION IF EXISTS ${oldest.name}`;
  if (!(await alterReads(db, change, patience))) {
    logger.warn({ partition: oldest.name }, 'reads to be dropped are being read; trying later');
    return 'blocked';
  }
  logger.info({ partition: oldest.name, before: oldest.before }, 'old reads dropped');
  return 'dropped';
}

/**
 * The oldest part when all of it is older than `cut`. The very first part holds nothing but what
 * was set aside as too old: that goes with the month after it, not as soon as it has come.
 */
function dueAt(cut: Date, [oldest, next]: Partition[]): Dated | null {
  const until = oldest?.name === 'pmin' ? next?.before : oldest?.before;
  if (!oldest?.before || !until || until > cut) return null;
  return { name: oldest.name, before: oldest.before };
}

type Dated = Partition & { before: Date };

/** Verdicts and acts that are about reads which go. */
async function forgetHeld(db: Database, before: Date): Promise<void> {
  const codes = await db.pool.query<{ code: string }[]>('SELECT DISTINCT code FROM held');
  for (const { code } of codes) {
    await deleteInParts(db, 'DELETE FROM held WHERE code = ? AND read_at < ? LIMIT ?', [
      code,
      before,
    ]);
  }
  await deleteInParts(db, 'DELETE FROM releases WHERE read_at < ? LIMIT ?', [before]);
}

async function deleteInParts(
  db: Database,
  statement: string,
  values: (string | Date)[],
): Promise<void> {
  for (;;) {
    const { affectedRows } = await db.pool.query<UpsertResult>(statement, [
      ...values,
      ROWS_AT_ONCE,
    ]);
    if (affectedRows < ROWS_AT_ONCE) return;
  }
}
