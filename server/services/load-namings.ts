import type { Transaction } from 'sequelize';
import type { Database } from '../lib/database.js';
import type { Identity } from '../models/identity.js';
import { modelsOf } from '../models/index.js';
import type { NamingRow } from './naming-change.js';

/** Identities that a change of some units' identities has to do with. */
export interface Namings {
  /** All of the units themselves. */
  own: Identity[];
  /** Of other units, among the numbers in question: on the register, and not. */
  ofRegistered: Identity[];
  ofStrangers: Identity[];
}

/**
 * All identities of the units, and whoever else has or had one of the numbers. Locked, gaps
 * included, so that the projector makes no stranger of such a number meanwhile.
 */
export async function loadNamings(
  db: Database,
  unitIds: readonly number[],
  compacts: readonly string[],
  transaction: Transaction,
): Promise<Namings> {
  const { Identity, Unit } = modelsOf(db.sequelize);
  const locked = { lock: transaction.LOCK.UPDATE, transaction };
  const own = await Identity.findAll({
    where: { unitId: [...new Set(unitIds)] },
    order: [['id', 'ASC']],
    ...locked,
  });
  const named = await Identity.findAll({
    where: { compact: [...new Set(compacts)] },
    order: [['id', 'ASC']],
    ...locked,
  });
  const ids = new Set(unitIds);
  const others = named.filter((row) => !ids.has(row.unitId));
  const units = await Unit.findAll({
    attributes: ['id'],
    where: { id: [...new Set(others.map((row) => row.unitId))], registered: true },
    transaction,
  });
  const registered = new Set(units.map((unit) => unit.id));
  return {
    own,
    ofRegistered: others.filter((row) => registered.has(row.unitId)),
    ofStrangers: others.filter((row) => !registered.has(row.unitId)),
  };
}

/** An identity as what it names and when. */
export function namingOf({ unitId, compact, validFrom, validTo }: Identity): NamingRow {
  return { unitId, value: compact, validFrom, validTo };
}
