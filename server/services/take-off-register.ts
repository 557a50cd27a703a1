import type { Database } from '../lib/database.js';
import { inTransaction } from '../lib/in-transaction.js';
import { modelsOf } from '../models/index.js';
import { bumpConfigVersion } from './bump-config-version.js';
import { planRegisterRework } from './plan-register-rework.js';
import { unitDisplay } from './unit-display.js';

/**
 * Takes a unit off the register: it loses its owner and is treated like any stranger. What was
 * read of it, and the tags that name it, stay.
 */
export async function takeOffRegister(
  db: Database,
  unitId: number,
  requestedBy: number | null,
): Promise<void> {
  await inTransaction(db.sequelize, async (transaction) => {
    await bumpConfigVersion(transaction);
    const { Unit } = modelsOf(db.sequelize);
    const unit = await Unit.findByPk(unitId, { transaction });
    if (!unit) return;
    const { kind, registered } = unit;
    await unit.update({ registered: false, ownerId: null }, { transaction });
    await planRegisterRework(transaction, {
      words: `${await unitDisplay(db, unitId, transaction)} taken off the register`,
      requestedBy,
      names: [],
      units: {
        before: [{ unitId, kind, registered }],
        after: [{ unitId, kind, registered: false }],
      },
    });
  });
}
