import type { Database } from '../lib/database.js';
import { modelsOf } from '../models/index.js';
import type { Organisation } from '../models/organisation.js';

/** The organisation with this id, or null; null in, null out. */
export async function findOrganisationById(
  db: Database,
  id: number | null,
): Promise<Organisation | null> {
  return id === null ? null : modelsOf(db.sequelize).Organisation.findByPk(id);
}
