import { conflict } from '../errors.js';
import type { Database } from '../lib/database.js';
import { modelsOf } from '../models/index.js';

/**
 * Stops a rebuild after the part in hand. What it has made anew stays; resumed, it goes on there.
 * A repeat changes nothing; 409 when it is done.
 */
export async function stopRebuild(db: Database, id: number): Promise<void> {
  await turn(db, id, ['waiting', 'running'], 'stopped');
}

/** Lets a stopped rebuild go on where it stopped. A repeat changes nothing; 409 when it is done. */
export async function resumeRebuild(db: Database, id: number): Promise<void> {
  await turn(db, id, ['stopped'], 'waiting');
}

async function turn(
  db: Database,
  id: number,
  from: ('waiting' | 'running' | 'stopped')[],
  to: 'waiting' | 'stopped',
): Promise<void> {
  const { Rebuild } = modelsOf(db.sequelize);
  const [changed] = await Rebuild.update({ state: to }, { where: { id, state: from } });
  if (changed === 1) return;
  const present = await Rebuild.findByPk(id, { attributes: ['state'] });
  if (present?.state === 'done') throw conflict('This rebuild is done already.');
}
