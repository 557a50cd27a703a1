import type { PoolConnection } from 'mariadb';
import type { EquipmentKind } from '../domain/identifiers/equipment-groups.js';
import type { Network } from '../domain/movements/configuration.js';
import { compareText } from '../domain/movements/evidence.js';
import { foldHistory, type UnitHistory } from '../domain/movements/fold-history.js';
import { changeableFrom, nothingKnown, type FoldState } from '../domain/movements/fold-state.js';
import type { Sighting } from '../domain/movements/fold-unit.js';
import { byKeys, inParts } from '../lib/bulk.js';
import { configurationVersion, type LoadedNetwork } from './load-network.js';
import type { Lane } from './take-work.js';
import { writeHistories, type FoldedUnit } from './write-histories.js';

const UNITS_A_PART = 500;

/** The configuration has moved on since it was loaded: load it and begin again. */
export class ConfigurationChanged extends Error {
  constructor() {
    super('the configuration has changed');
    this.name = 'ConfigurationChanged';
  }
}

/**
 * Second stage: folds the sightings of dirty units of one lane, from where they changed on, into
 * stays, legs and last seen. Answers the units done. Whoever marks one of them meanwhile waits.
 */
export async function foldUnits(
  connection: PoolConnection,
  { network, version }: Pick<LoadedNetwork, 'network' | 'version'>,
  lane: Lane,
  most: number,
): Promise<number[]> {
  const dirty = await connection.query<{ unit_id: number; from_at: Date }[]>(
    'SELECT unit_id, from_at FROM dirty_units WHERE lane = ? ORDER BY unit_id LIMIT ? FOR UPDATE',
    [lane, most],
  );
  // A change of configuration marks units in its own transaction: what is marked must be folded
  // under the configuration that it was marked for.
  if (dirty.length && version !== (await configurationVersion(connection))) {
    throw new ConfigurationChanged();
  }
  for (const part of inParts(dirty, UNITS_A_PART)) {
    const starts = await startsOf(connection, part);
    const folded = await foldPart(connection, network, starts);
    await writeHistories(connection, folded);
    await connection.query('DELETE FROM dirty_units WHERE unit_id IN (?)', [
      part.map((row) => row.unit_id),
    ]);
  }
  return dirty.map((row) => row.unit_id);
}

/** Where the fold of one unit begins again. */
export interface UnitStart {
  unitId: number;
  /** Sightings before this instant (ms) are in `state`. */
  beforeAt: number;
  state: FoldState;
}

async function startsOf(
  connection: PoolConnection,
  dirty: readonly { unit_id: number; from_at: Date }[],
): Promise<UnitStart[]> {
  const latest = await byKeys<{ unit_id: number; before_at: Date }>(
    connection,
    'SELECT unit_id, MAX(before_at) AS before_at FROM unit_folds WHERE :keys GROUP BY unit_id',
    'unit_id = ? AND before_at <= ?',
    dirty.map((row) => [row.unit_id, row.from_at]),
  );
  const states = await byKeys<{ unit_id: number; before_at: Date; state: string }>(
    connection,
    'SELECT unit_id, before_at, state FROM unit_folds WHERE :keys',
    'unit_id = ? AND before_at = ?',
    latest.map((row) => [row.unit_id, row.before_at]),
  );
  const known = new Map(states.map((row) => [row.unit_id, row]));
  return dirty.map(({ unit_id: unitId }) => {
    const row = known.get(unitId);
    return row
      ? { unitId, beforeAt: row.before_at.getTime(), state: JSON.parse(row.state) as FoldState }
      : { unitId, beforeAt: 0, state: nothingKnown() };
  });
}

async function foldPart(
  connection: PoolConnection,
  network: Network,
  starts: readonly UnitStart[],
): Promise<FoldedUnit[]> {
  const kinds = await loadKinds(connection, starts);
  const sightings = await loadSightings(connection, network, starts);
  const emptied = starts.filter(
    ({ unitId, beforeAt }) => beforeAt > 0 && !sightings.get(unitId)?.length,
  );
  if (emptied.length) {
    const afresh = emptied.map(({ unitId }) => ({ unitId, beforeAt: 0, state: nothingKnown() }));
    const rest = starts.filter((start) => !emptied.includes(start));
    return [
      ...(await foldPart(connection, network, rest)),
      ...(await foldPart(connection, network, afresh)),
    ];
  }
  return starts.map((start) => {
    const own = sightings.get(start.unitId) ?? [];
    const { kind, ownerId, registered } = kinds.get(start.unitId) as UnitRow;
    const history: UnitHistory = foldHistory(network, { kind, registered }, start.state, own);
    const changeable = changeableFrom(start.state, start.beforeAt);
    return { start, changeable, ownerId, registered, history, last: own.at(-1) ?? null };
  });
}

interface UnitRow {
  kind: EquipmentKind;
  ownerId: number | null;
  registered: boolean;
}

async function loadKinds(
  connection: PoolConnection,
  starts: readonly UnitStart[],
): Promise<Map<number, UnitRow>> {
  if (starts.length === 0) return new Map();
  const rows = await connection.query<
    { id: number; kind: EquipmentKind; owner_id: number | null; registered: number }[]
  >('SELECT id, kind, owner_id, registered FROM units WHERE id IN (?)', [
    starts.map((start) => start.unitId),
  ]);
  return new Map(
    rows.map((row) => [
      row.id,
      { kind: row.kind, ownerId: row.owner_id, registered: Boolean(row.registered) },
    ]),
  );
}

/** A sighting as it is loaded, with what the last-seen row needs. */
export interface LoadedSighting extends Sighting {
  passStartedAt: Date;
  passOrdinal: number;
}

interface SightingRow {
  unit_id: number;
  read_point_id: number;
  first_at: Date;
  first_antenna: number;
  first_tag: Buffer;
  last_at: Date;
  role: Sighting['role'];
  direction: 'increasing' | 'decreasing' | 'unknown';
  pass_started_at: Date;
  pass_ordinal: number;
}

async function loadSightings(
  connection: PoolConnection,
  network: Network,
  starts: readonly UnitStart[],
): Promise<Map<number, LoadedSighting[]>> {
  const rows = await byKeys<SightingRow>(
    connection,
    `SELECT unit_id, read_point_id, first_at, first_antenna, first_tag, last_at, role, direction,
       pass_started_at, pass_ordinal
     FROM passages FORCE INDEX (passages_unit) WHERE stray IS NULL AND (:keys)`,
    'unit_id = ? AND first_at >= ?',
    starts.map(({ unitId, beforeAt }) => [unitId, new Date(beforeAt)]),
  );
  rows.sort((a, b) => compareRows(network, a, b));
  const sightings = new Map<number, LoadedSighting[]>();
  for (const row of rows) {
    const own = sightings.get(row.unit_id) ?? [];
    sightings.set(row.unit_id, own);
    own.push({
      readPointId: row.read_point_id,
      firstAt: row.first_at.getTime(),
      lastAt: row.last_at.getTime(),
      role: row.role,
      direction: row.direction === 'unknown' ? null : row.direction,
      passStartedAt: row.pass_started_at,
      passOrdinal: row.pass_ordinal,
    });
  }
  return sightings;
}

/** The total order of sightings: time, site code, antenna number, tag. */
function compareRows(network: Network, a: SightingRow, b: SightingRow): number {
  const siteCode = (row: SightingRow) =>
    network.site(network.readPoint(row.read_point_id).siteId).code;
  return (
    a.first_at.getTime() - b.first_at.getTime() ||
    compareText(siteCode(a), siteCode(b)) ||
    a.first_antenna - b.first_antenna ||
    compareText(a.first_tag.toString(), b.first_tag.toString())
  );
}
