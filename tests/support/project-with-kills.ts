import type { SqlError } from 'mariadb';
import type { Database } from '../../server/lib/database.js';
import { createProjector, type Projector } from '../../server/projections/projector.js';
import { buildClock, buildContext } from './context.js';
import { openFused } from './fused-database.js';
import { SeededRandom } from './seeded-random.js';
import { RECEIVED_AT } from './write-ledger.js';

/** Small, so that a ledger of some thousand reads takes many portions. */
const MOST_READS = 250;
const KILLED = 0.6;
const MOST_STATEMENTS = 30;
/** So many connections are lost whatever the seed, each within the first statements of its turn. */
const LEAST_KILLS = 2;
const FIRST_STATEMENTS = 3;

/**
 * Folds what comes in while `writing` goes on, and the rest after it: one projector after another,
 * each new to what the one before had done or half done, many of them losing their connection in
 * mid-transaction. Answers how many did. The last one, which finishes, loses nothing.
 */
export async function projectWithKills(
  db: Database,
  writing: Promise<unknown>,
  seed: number,
): Promise<number> {
  const random = new SeededRandom(seed);
  const fused = openFused(db);
  let busy = true;
  const written = writing.finally(() => (busy = false));
  const context = buildContext(fused, { clock: buildClock(RECEIVED_AT.toISOString()) });
  const onlooker = createProjector(buildContext(db));
  try {
    while (busy || (await onlooker.lagMs())) {
      const statements = random.chance(KILLED) ? random.whole(1, MOST_STATEMENTS) : 0;
      const isDue = fused.burnt < LEAST_KILLS;
      fused.burnAfter(isDue ? random.whole(1, FIRST_STATEMENTS) : statements);
      await runUnlessKilled(createProjector(context, { mostReads: MOST_READS }));
      await db.pool.query('UPDATE worker_leases SET expires_at = NOW(3) - INTERVAL 1 SECOND');
    }
    await written;
  } finally {
    await fused.close();
  }
  await createProjector(buildContext(db)).drain();
  return fused.burnt;
}

/** A lost connection is what was asked for; any other failure is one of the test. */
async function runUnlessKilled(projector: Projector): Promise<void> {
  try {
    await projector.runOnce();
  } catch (error) {
    if (!(error as Partial<SqlError>).fatal) throw error;
    return;
  }
  await projector.stop();
}
