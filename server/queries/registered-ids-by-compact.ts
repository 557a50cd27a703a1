import type { Database } from '../lib/database.js';
import { begin, end } from '../lib/validity.js';
import { modelsOf } from '../models/index.js';

/**
 * The unit of the register that holds each identity now, else the one that held it last. What
 * reads have made of the number besides is no matter of the register.
 */
export async function registeredIdsByCompact(
  db: Database,
  compacts: string[],
): Promise<Map<string, number>> {
  const { Identity, Unit } = modelsOf(db.sequelize);
  const named = await Identity.findAll({
    attributes: ['compact', 'unitId', 'validFrom', 'validTo'],
    where: { compact: [...new Set(compacts)] },
  });
  const units = await Unit.findAll({
    attributes: ['id'],
    where: { id: [...new Set(named.map(({ unitId }) => unitId))], registered: true },
  });
  const registered = new Set(units.map(({ id }) => id));
  const ofRegister = named.filter(({ unitId }) => registered.has(unitId));
  const inOrder = ofRegister.sort((a, b) => compare(end(a), end(b)) || compare(begin(a), begin(b)));
  return new Map(inOrder.map(({ compact, unitId }) => [compact, unitId] as const));
}

/** Infinite bounds are equal to themselves. */
const compare = (a: number, b: number): number => (a === b ? 0 : a < b ? -1 : 1);
