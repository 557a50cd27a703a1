import type { PoolConnection } from 'mariadb';
import type { Lane } from '../domain/lanes.js';
import type { EquipmentKind } from '../domain/identifiers/equipment-groups.js';
import type { Network } from '../domain/movements/configuration.js';
import { foldHistory } from '../domain/movements/fold-history.js';
import { changeableFrom, nothingKnown, type FoldState } from '../domain/movements/fold-state.js';
import { byKeys, inParts } from '../lib/bulk.js';
import { KnownCompanions } from './known-companions.js';
import { loadFacts } from './load-facts.js';
import { writeHistories, type FoldedUnit } from './write-histories.js';

const UNITS_A_PART = 500;

/**
 * Second stage: folds the sightings of dirty units of one lane, from where they changed on, into
 * stays, legs and last seen. Answers the units done. Whoever marks one of them meanwhile waits.
 */
export async function foldUnits(
  connection: PoolConnection,
  network: Network,
  lane: Lane,
  most: number,
): Promise<number[]> {
  const dirty = await connection.query<{ unit_id: number; from_at: Date }[]>(
    'SELECT unit_id, from_at FROM dirty_units WHERE lane = ? ORDER BY unit_id LIMIT ? FOR UPDATE',
    [lane, most],
  );
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
  if (starts.length === 0) return [];
  const kinds = await loadKinds(connection, starts);
  const facts = await loadFacts(connection, network, starts);
  const emptied = starts.filter(
    ({ unitId, beforeAt }) => beforeAt > 0 && !facts.get(unitId)?.length,
  );
  if (emptied.length) {
    const afresh = emptied.map(({ unitId }) => ({ unitId, beforeAt: 0, state: nothingKnown() }));
    const rest = starts.filter((start) => !emptied.includes(start));
    return [
      ...(await foldPart(connection, network, rest)),
      ...(await foldPart(connection, network, afresh)),
    ];
  }
  const known = new KnownCompanions(connection, network);
  const fold = (start: UnitStart): FoldedUnit => {
    const { kind, ownerId, registered } = kinds.get(start.unitId) as UnitRow;
    const own = facts.get(start.unitId) ?? [];
    const companions = known.of(start.unitId);
    const history = foldHistory(network, { kind, registered }, start.state, own, companions);
    const changeable = changeableFrom(start.state, start.beforeAt);
    return { start, changeable, ownerId, registered, history };
  };
  // A fold that needed to know who was with it is done again once that is known.
  let folded = starts.map(fold);
  while (await known.learn()) {
    folded = folded.map((one) => (known.lacked(one.start.unitId) ? fold(one.start) : one));
  }
  return folded;
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
