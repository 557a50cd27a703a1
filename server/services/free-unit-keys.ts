import { QueryTypes, type Transaction } from 'sequelize';
import type { Database } from '../lib/database.js';

/**
 * Lets go of the keys of registered units that carry these numbers for a part of time only: the
 * key that is a number belongs to whom the projector makes of reads that name nobody else.
 */
export async function freeUnitKeys(
  db: Database,
  compacts: readonly string[],
  transaction: Transaction,
): Promise<void> {
  if (compacts.length === 0) return;
  await db.sequelize.query(
    `UPDATE units u SET u.unit_key = CONCAT(u.unit_key, '@', u.id)
     WHERE u.unit_key IN (:compacts) AND u.registered = 1 AND EXISTS (
       SELECT 1 FROM identities i WHERE i.unit_id = u.id AND i.compact = u.unit_key
         AND (i.valid_from IS NOT NULL OR i.valid_to IS NOT NULL))`,
    { replacements: { compacts: [...new Set(compacts)] }, type: QueryTypes.UPDATE, transaction },
  );
}
