import type { Database } from '../lib/database.js';
import { modelsOf } from '../models/index.js';
import { changeConfiguration } from './change-configuration.js';
import { refuseUsed } from './refuse-used.js';

const uses = [
  {
    words: 'reads',
    sql: 'SELECT 1 FROM `reads` WHERE site_id = :siteId AND antenna_no = :number',
  },
];

/** Removes an antenna that has read nothing yet; else 409, for its reads would lose their place. */
export async function removeAntenna(
  db: Database,
  { id, siteId, number }: { id: number; siteId: number; number: number },
  requestedBy: number | null,
): Promise<void> {
  await changeConfiguration(db, requestedBy, async (transaction) => {
    await refuseUsed(db, uses, { siteId, number }, transaction);
    await modelsOf(db.sequelize).Antenna.destroy({ where: { id }, transaction });
  });
}
