import type { ReadPointInput } from '../contract/administration.js';
import { batchPointer, faultRepeats, given, type Batch, type PointerTo } from '../lib/batch.js';
import type { Database } from '../lib/database.js';
import { Faults } from '../lib/faults.js';
import { modelsOf } from '../models/index.js';
import type { ReadPoint } from '../models/read-point.js';
import { routeNodeIdsByCode, siteIdsByCode } from '../queries/ids-by-code.js';
import { changeConfiguration } from './change-configuration.js';
import { placeColumns } from './place-columns.js';
import { towardColumn } from './toward-column.js';

const columns = [
  'name',
  'track',
  'kind',
  'decreasingSiteId',
  'decreasingTrack',
  'increasingSiteId',
  'increasingTrack',
  'passGapSeconds',
  'visitGapSeconds',
  'drillMinutes',
  'toward',
] as const;

/** Stores read points by site and code, all or none. What is left out stays as it is. */
export async function upsertReadPoints(
  db: Database,
  batch: Batch<ReadPointInput>,
  requestedBy: number | null,
): Promise<void> {
  const faults = new Faults();
  faultRepeats(batch, faults, 'code', (item) => `${item.site} ${item.code}`);
  const { ReadPoint } = modelsOf(db.sequelize);
  await changeConfiguration(db, requestedBy, async (transaction) => {
    const siteIds = await siteIdsByCode(db, batch.items.flatMap(siteCodesOf), transaction);
    const nodeIds = await routeNodeIdsByCode(db, batch.items.flatMap(nodeCodesOf), transaction);
    const codes = batch.items.map((item) => item.code);
    const known = await ReadPoint.findAll({
      where: { siteId: [...siteIds.values()], code: codes },
      transaction,
    });
    const byKey = new Map(known.map((row) => [`${row.siteId} ${row.code}`, row]));
    const rows = batch.items.map((item, index) => {
      const present = byKey.get(`${siteIds.get(item.site)} ${item.code}`);
      const at = (...path: PropertyKey[]) => batchPointer(batch, index, ...path);
      faultUnknownSites(item, siteIds, faults, at);
      const row = rowOf(item, present, siteIds, faults, at);
      return { ...row, toward: towardColumn(item, row, present, nodeIds, faults, at) };
    });
    faults.refuse();
    await ReadPoint.bulkCreate(rows, { updateOnDuplicate: [...columns], transaction });
  });
}

function siteCodesOf({ site, decreasingPlace, increasingPlace }: ReadPointInput): string[] {
  return [site, decreasingPlace?.site ?? site, increasingPlace?.site ?? site];
}

function nodeCodesOf({ decreasingToward = [], increasingToward = [] }: ReadPointInput): string[] {
  return [...decreasingToward, ...increasingToward];
}

function faultUnknownSites(
  item: ReadPointInput,
  siteIds: Map<string, number>,
  faults: Faults,
  at: PointerTo,
): void {
  if (!siteIds.has(item.site)) faults.add(at('site'), `${item.site} is not known`);
  for (const side of ['decreasingPlace', 'increasingPlace'] as const) {
    const code = item[side]?.site;
    if (code && !siteIds.has(code)) faults.add(at(side, 'site'), `${code} is not known`);
  }
}

function rowOf(
  item: ReadPointInput,
  present: ReadPoint | undefined,
  siteIds: Map<string, number>,
  faults: Faults,
  at: PointerTo,
) {
  const { code, name, kind, track, passGapSeconds, visitGapSeconds, drillMinutes } = item;
  const row = {
    passGapSeconds: present?.passGapSeconds ?? 180,
    visitGapSeconds: present?.visitGapSeconds ?? 60,
    drillMinutes: present?.drillMinutes ?? 60,
    track: present?.track ?? null,
    ...given({ track, passGapSeconds, visitGapSeconds, drillMinutes }),
    siteId: siteIds.get(item.site) ?? 0,
    code,
    name,
    kind,
  };
  if (row.visitGapSeconds > row.passGapSeconds) {
    faults.add(at('visitGapSeconds'), `must be at most passGapSeconds, ${row.passGapSeconds}`);
  }
  return { ...row, ...placeColumns(item, present, siteIds, faults, at) };
}
