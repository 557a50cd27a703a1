import type { Context } from '../lib/context.js';
import { listActors } from '../queries/list-actors.js';
import { listLiveWatches } from '../queries/list-live-watches.js';
import { evaluateWatch } from '../services/evaluate-watch.js';
import { markEvaluated } from '../services/mark-evaluated.js';

/**
 * Evaluates every watch once, each in a transaction of its own; one that fails is logged and does
 * not stop the others. Answers how many alerts were raised and cleared.
 */
export async function evaluateWatches(
  context: Context,
): Promise<{ raised: number; cleared: number }> {
  const { db, clock, logger, liveEvents } = context;
  const startedAt = clock.now();
  const watches = await listLiveWatches(db);
  const actors = await listActors(
    db,
    watches.map((watch) => watch.personId),
  );
  const sum = { raised: 0, cleared: 0, corrected: 0 };
  const done: number[] = [];
  for (const { id, personId } of watches) {
    const actor = actors.get(personId);
    if (!actor) continue;
    try {
      const result = await evaluateWatch(context, id, actor);
      sum.raised += result.raised;
      sum.cleared += result.cleared;
      sum.corrected += result.corrected;
      done.push(id);
    } catch (error) {
      logger.error({ err: error, watchId: id }, 'a watch could not be evaluated');
    }
  }
  await markEvaluated(db, done, startedAt);
  if (sum.raised + sum.cleared + sum.corrected > 0) liveEvents.publish({ alerts: true });
  return { raised: sum.raised, cleared: sum.cleared };
}
