import type { OrganisationInput } from '../contract/administration.js';
import { faultRepeats, type Batch } from '../lib/batch.js';
import type { Database } from '../lib/database.js';
import { Faults } from '../lib/faults.js';
import { modelsOf } from '../models/index.js';

/** Stores organisations by code, all or none. */
export async function upsertOrganisations(
  db: Database,
  batch: Batch<OrganisationInput>,
): Promise<void> {
  const faults = new Faults();
  faultRepeats(batch, faults, 'code', (item) => item.code);
  faults.refuse();
  const { Organisation } = modelsOf(db.sequelize);
  await Organisation.bulkCreate(batch.items, { updateOnDuplicate: ['name', 'kind'] });
}
