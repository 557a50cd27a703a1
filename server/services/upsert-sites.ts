import { Op, type Transaction } from 'sequelize';
import type { SiteInput } from '../contract/administration.js';
import { batchPointer, faultRepeats, type Batch } from '../lib/batch.js';
import type { Database } from '../lib/database.js';
import { Faults } from '../lib/faults.js';
import { modelsOf } from '../models/index.js';
import { siteIdsByCode } from '../queries/ids-by-code.js';
import { changeConfiguration } from './change-configuration.js';

/**
 * Stores sites by code, all or none, each with its node of the route graph. Hours and leads
 * that are left out stay as they are.
 */
export async function upsertSites(
  db: Database,
  batch: Batch<SiteInput>,
  requestedBy: number | null,
): Promise<void> {
  const faults = new Faults();
  faultRepeats(batch, faults, 'code', (item) => item.code);
  faults.refuse();
  const { Site } = modelsOf(db.sequelize);
  const codes = batch.items.map((item) => item.code);
  await changeConfiguration(db, requestedBy, async (transaction) => {
    const known = await Site.findAll({ where: { code: codes }, transaction });
    const byCode = new Map(known.map((site) => [site.code, site]));
    const rows = batch.items.map((item) => ({
      ...item,
      returnHours: item.returnHours ?? byCode.get(item.code)?.returnHours ?? 12,
      dwellLimitHours: item.dwellLimitHours ?? byCode.get(item.code)?.dwellLimitHours ?? 96,
      leads: item.leads ? JSON.stringify(item.leads) : (byCode.get(item.code)?.leads ?? '[]'),
    }));
    await Site.bulkCreate(rows, {
      updateOnDuplicate: [
        'name',
        'kind',
        'latitude',
        'longitude',
        'timeZone',
        'returnHours',
        'dwellLimitHours',
        'leads',
      ],
      transaction,
    });
    await placeNodes(db, batch, transaction);
  });
}

async function placeNodes(
  db: Database,
  batch: Batch<SiteInput>,
  transaction: Transaction,
): Promise<void> {
  const { RouteNode } = modelsOf(db.sequelize);
  const codes = batch.items.map((item) => item.code);
  const siteIds = await siteIdsByCode(db, codes, transaction);
  const nodes = await RouteNode.findAll({
    where: { [Op.or]: [{ siteId: [...siteIds.values()] }, { code: codes }] },
    transaction,
  });
  const bySite = new Map(nodes.map((node) => [node.siteId, node]));
  const byCode = new Map(nodes.map((node) => [node.code, node]));
  const faults = new Faults();
  const rows = batch.items.map((item, index) => {
    const siteId = siteIds.get(item.code) ?? null;
    const code = bySite.get(siteId)?.code ?? item.code;
    const taken = byCode.get(code)?.siteId ?? siteId;
    if (taken !== siteId) {
      faults.add(batchPointer(batch, index, 'code'), 'names the route node of another site');
    }
    return { code, name: item.name, siteId, latitude: item.latitude, longitude: item.longitude };
  });
  faults.refuse();
  await RouteNode.bulkCreate(rows, {
    updateOnDuplicate: ['name', 'siteId', 'latitude', 'longitude'],
    transaction,
  });
}
