import type { Context } from '../lib/context.js';
import { inTransaction } from '../lib/in-transaction.js';
import { modelsOf } from '../models/index.js';

/** Ends a watch and clears its alerts; mail about them that still waits will be declined. */
export async function endWatch(context: Context, watchId: number): Promise<void> {
  const { db, clock, liveEvents } = context;
  const { Alert, Watch } = modelsOf(db.sequelize);
  const now = clock.now();
  const cleared = await inTransaction(db.sequelize, async (transaction) => {
    // The row first: an evaluation that runs now waits here, and then finds the watch ended.
    await Watch.update({ endedAt: now }, { where: { id: watchId, endedAt: null }, transaction });
    const [count] = await Alert.update(
      { state: 'cleared', clearedAt: now, clearedBecause: 'ended' },
      { where: { watchId, state: ['open', 'acknowledged'] }, transaction },
    );
    return count;
  });
  if (cleared > 0) liveEvents.publish({ alerts: true });
}
