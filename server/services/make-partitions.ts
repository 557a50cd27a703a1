import type { Context } from '../lib/context.js';
import { monthStart } from '../lib/month-start.js';
import { countReads, readsPartitions, type Partition } from '../queries/reads-partitions.js';
import { alterReads, type Patience } from './alter-reads.js';

/** Whole months that have a partition of their own, the present one not counted. */
const MONTHS_AHEAD = 12;
/** Reads that splitting may copy: while it copies, nothing is taken in. */
const MOST_COPIED = 50_000;

/** `blocked`: somebody reads the table; `crowded`: too many reads lie beyond the last month. */
export type MadePartitions = 'there' | 'made' | 'blocked' | 'crowded';

/**
 * Splits the months to come off the last partition of the ledger's reads. Reads with a time that
 * far ahead (they are set aside) move along when they are few; else all stays as it is, and the
 * log says so.
 */
export async function makePartitions(
  { db, clock, logger }: Pick<Context, 'db' | 'clock' | 'logger'>,
  patience?: Patience,
): Promise<MadePartitions> {
  const partitions = await readsPartitions(db);
  const missing = missingMonths(partitions, clock.now());
  const last = partitions.at(-1);
  if (missing.length === 0 || !last) return 'there';
  const count = await countReads(db, last, MOST_COPIED + 1);
  if (count > MOST_COPIED) {
    logger.error(
      { partition: last.name, atLeast: count },
      'too many reads lie beyond the last month to split months off; they stay in one partition',
    );
    return 'crowded';
  }
  try {
    return (await alterReads(db, splitting(last, missing), patience)) ? 'made' : 'blocked';
  } catch (error) {
    // Another server made them meanwhile.
    if (missingMonths(await readsPartitions(db), clock.now()).length === 0) return 'there';
    throw error;
  }
}

/** Begins of the months that have no partition yet, from the last that has one on. */
function missingMonths(partitions: readonly Partition[], now: Date): Date[] {
  const reached = partitions.findLast(({ before }) => before !== null)?.before;
  const end = monthStart(now, MONTHS_AHEAD + 1);
  const months: Date[] = [];
  if (!reached) return months;
  for (let month = reached; month < end; month = monthStart(month, 1)) months.push(month);
  return months;
}

function splitting(last: Partition, months: readonly Date[]): string {
  const parts = months.map((month) => {
    const name = day(month).slice(0, 7).replace('-', '');
    return `PARTITION p${name} VALUES LESS THAN ('${day(monthStart(month, 1))}')`;
  });
  parts.push(`PARTITION ${last.name} VALUES LESS THAN (MAXVALUE)`);
  return `REORGANIZE PARTITION ${last.name} INTO (${parts.join(', ')})`;
}

const day = (at: Date) => at.toISOString().slice(0, 10);
