import type { AntennaInput } from '../contract/administration.js';
import { batchPointer, faultRepeats, type Batch } from '../lib/batch.js';
import type { Database } from '../lib/database.js';
import { Faults } from '../lib/faults.js';
import { modelsOf } from '../models/index.js';
import { siteIdsByCode } from '../queries/ids-by-code.js';
import { changeConfiguration } from './change-configuration.js';

/** Stores antennas by site and number, all or none. */
export async function upsertAntennas(
  db: Database,
  batch: Batch<AntennaInput>,
  requestedBy: number | null,
): Promise<void> {
  const faults = new Faults();
  faultRepeats(batch, faults, 'number', (item) => `${item.site} ${item.number}`);
  const { Antenna, ReadPoint } = modelsOf(db.sequelize);
  await changeConfiguration(db, requestedBy, async (transaction) => {
    const siteCodes = batch.items.map((item) => item.site);
    const siteIds = await siteIdsByCode(db, siteCodes, transaction);
    const readPoints = await ReadPoint.findAll({
      attributes: ['id', 'siteId', 'code'],
      where: { siteId: [...siteIds.values()] },
      transaction,
    });
    const byKey = new Map(readPoints.map((row) => [`${row.siteId} ${row.code}`, row.id]));
    const rows = batch.items.map((item, index) => {
      const siteId = siteIds.get(item.site);
      const readPointId = byKey.get(`${siteId} ${item.readPoint}`);
      if (siteId === undefined) {
        faults.add(batchPointer(batch, index, 'site'), `${item.site} is not known`);
      } else if (readPointId === undefined) {
        const detail = `${item.readPoint} is not a read point of ${item.site}`;
        faults.add(batchPointer(batch, index, 'readPoint'), detail);
      }
      const { number, offsetM, side } = item;
      return { siteId: siteId ?? 0, readPointId: readPointId ?? 0, number, offsetM, side };
    });
    faults.refuse();
    await Antenna.bulkCreate(rows, {
      updateOnDuplicate: ['readPointId', 'offsetM', 'side'],
      transaction,
    });
  });
}
