import type { Context } from '../lib/context.js';
import { makePartitions, type MadePartitions } from '../services/make-partitions.js';
import { retireMonth, type RetiredMonth } from '../services/retire-month.js';

/** Makes room for the reads of the months to come, and drops a month that is too old. */
export async function keepMonths(
  context: Context,
): Promise<{ made: MadePartitions; retired: RetiredMonth }> {
  const made = await makePartitions(context);
  return { made, retired: await retireMonth(context) };
}
