import type { Place, ReadPointInput } from '../contract/administration.js';
import { batchPointer, faultRepeats, given, type Batch } from '../lib/batch.js';
import type { Database } from '../lib/database.js';
import { Faults } from '../lib/faults.js';
import { modelsOf } from '../models/index.js';
import type { ReadPoint } from '../models/read-point.js';
import { siteIdsByCode } from '../queries/ids-by-code.js';
import { changeConfiguration } from './change-configuration.js';

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
] as const;

interface Sides {
  decreasing: Place | null;
  increasing: Place | null;
}

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
      return rowOf(item, present, siteIds, faults, at);
    });
    faults.refuse();
    await ReadPoint.bulkCreate(rows, { updateOnDuplicate: [...columns], transaction });
  });
}

type PointerTo = (...path: PropertyKey[]) => string;

function siteCodesOf({ site, decreasingPlace, increasingPlace }: ReadPointInput): string[] {
  return [site, decreasingPlace?.site ?? site, increasingPlace?.site ?? site];
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

/** Sides that are given, else those it has; a new spot without sides stands in its own site. */
function placeColumns(
  item: ReadPointInput,
  present: ReadPoint | undefined,
  siteIds: Map<string, number>,
  faults: Faults,
  at: PointerTo,
) {
  const { decreasing, increasing } = item.kind === 'spot' ? spotSides(item) : lineSides(item);
  if (item.kind === 'spot') faultSpot(item, faults, at);
  else if (!present) {
    for (const side of ['decreasingPlace', 'increasingPlace'] as const) {
      if (item[side] === undefined) {
        faults.add(at(side), 'is missing: a site, or null for the open line');
      }
    }
  }
  const idOf = (place: Place | null) => (place ? (siteIds.get(place.site) ?? null) : null);
  return {
    decreasingSiteId:
      decreasing === undefined ? (present?.decreasingSiteId ?? null) : idOf(decreasing),
    decreasingTrack:
      decreasing === undefined ? (present?.decreasingTrack ?? null) : (decreasing?.track ?? null),
    increasingSiteId:
      increasing === undefined ? (present?.increasingSiteId ?? null) : idOf(increasing),
    increasingTrack:
      increasing === undefined ? (present?.increasingTrack ?? null) : (increasing?.track ?? null),
  };
}

function lineSides(item: ReadPointInput): Partial<Sides> {
  return { decreasing: item.decreasingPlace, increasing: item.increasingPlace };
}

/** A spot has one place on both sides. */
function spotSides(item: ReadPointInput): Sides {
  const own = { site: item.site, track: item.track ?? null };
  const place = item.increasingPlace ?? item.decreasingPlace ?? own;
  return { decreasing: place, increasing: place };
}

function faultSpot(item: ReadPointInput, faults: Faults, at: PointerTo): void {
  const { decreasingPlace, increasingPlace } = item;
  for (const side of ['decreasingPlace', 'increasingPlace'] as const) {
    if (item[side] === null) faults.add(at(side), 'must be a site: a spot is never the open line');
  }
  if (decreasingPlace && increasingPlace && !isSamePlace(decreasingPlace, increasingPlace)) {
    faults.add(at('decreasingPlace'), 'must be the increasingPlace: a spot has one place');
  }
}

const isSamePlace = (a: Place, b: Place) => a.site === b.site && a.track === b.track;
