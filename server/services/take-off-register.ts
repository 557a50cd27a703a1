import type { Database } from '../lib/database.js';
import { inTransaction } from '../lib/in-transaction.js';
import { modelsOf } from '../models/index.js';
import { bumpConfigVersion } from './bump-config-version.js';

/**
 * Takes a unit off the register: it loses its owner and is treated like any stranger. What was
 * read of it, and the tags that name it, stay.
 */
export async function takeOffRegister(db: Database, unitId: number): Promise<void> {
  await inTransaction(db.sequelize, async (transaction) => {
    await bumpConfigVersion(transaction);
    await modelsOf(db.sequelize).Unit.update(
      { registered: false, ownerId: null },
      { where: { id: unitId }, transaction },
    );
  });
}
