import type { PoolConnection } from 'mariadb';
import type { UnitHistory } from '../domain/movements/fold-history.js';
import type { Changeable } from '../domain/movements/fold-state.js';
import { byKeys, insertRows, type SqlValue } from '../lib/bulk.js';
import { NEVER_SEEN } from '../lib/sentinels.js';
import type { UnitStart } from './fold-units.js';
import {
  doubtValues,
  DOUBT_COLUMNS,
  lastSeenValues,
  LAST_SEEN_COLUMNS,
  legValues,
  LEG_COLUMNS,
  stayValues,
  STAY_COLUMNS,
  visibleValues,
  VISIBLE_COLUMNS,
} from './history-rows.js';
import { isSame } from './same-row.js';

/** One unit folded anew, with what its rows need. */
export interface FoldedUnit {
  start: UnitStart;
  /** Stored rows that the fold may have changed. */
  changeable: Changeable;
  ownerId: number | null;
  registered: boolean;
  history: UnitHistory;
}

/** Writes what changed of the folded units' stays, legs, last seen and checkpoints. */
export async function writeHistories(
  connection: PoolConnection,
  units: readonly FoldedUnit[],
): Promise<void> {
  await writeDifferences(connection, units, {
    table: 'stays',
    columns: STAY_COLUMNS,
    orderedBy: 'first_seen_at',
    key: ['unit_id', 'first_seen_at', 'site_id'],
    isChangeable: (own, firstSeenAt, siteId) => own.includes({ siteId, firstSeenAt }),
    rowsOf: ({ start, history }) => history.stays.map((stay) => stayValues(start.unitId, stay)),
    former: rememberFormerStays,
  });
  await writeDifferences(connection, units, {
    table: 'legs',
    columns: LEG_COLUMNS,
    orderedBy: 'to_first_seen_at',
    key: ['unit_id', 'to_first_seen_at', 'to_site_id'],
    isChangeable: (own, firstSeenAt, siteId) => own.includes({ siteId, firstSeenAt }),
    rowsOf: ({ start, history }) => history.legs.map((leg) => legValues(start.unitId, leg)),
  });
  await writeDifferences(connection, units, {
    table: 'doubts',
    columns: DOUBT_COLUMNS,
    orderedBy: 'at',
    key: ['unit_id', 'at', 'read_point_id'],
    isChangeable: ({ doubtsSince }, at) => at >= doubtsSince,
    rowsOf: ({ start, history }) => history.doubts.map((one) => doubtValues(start.unitId, one)),
  });
  await writeLastSeen(connection, units);
  await writeCheckpoints(connection, units);
}

interface Target {
  table: string;
  columns: readonly string[];
  orderedBy: string;
  key: readonly [string, string, string];
  /** Whether a stored row, by its instant (ms) and place, may be otherwise now. */
  isChangeable: (changeable: Changeable, at: number, placeId: number) => boolean;
  /** Hears of the keys of rows that have gone. */
  former?: (connection: PoolConnection, keys: readonly SqlValue[][]) => Promise<void>;
  rowsOf: (unit: FoldedUnit) => SqlValue[][];
}

async function writeDifferences(
  connection: PoolConnection,
  units: readonly FoldedUnit[],
  { table, columns, orderedBy, key, isChangeable, rowsOf, former }: Target,
): Promise<void> {
  const rows = await byKeys<Record<string, SqlValue>>(
    connection,
    `SELECT * FROM ${table} FORCE INDEX (PRIMARY) WHERE :keys`,
    `unit_id = ? AND ${orderedBy} >= ?`,
    units.map(({ start, changeable }) => {
      const since = Math.min(changeable.since, changeable.doubtsSince);
      return [start.unitId, new Date(since)];
    }),
  );
  const keyOf = (values: readonly (SqlValue | undefined)[]) =>
    values.map((value) => (value instanceof Date ? value.getTime() : value)).join(' ');
  const changeable = new Map(units.map((unit) => [unit.start.unitId, unit.changeable]));
  const stored = new Map<string, Record<string, SqlValue>>();
  for (const row of rows) {
    const [unitId, at, placeId] = key.map((column) => row[column]) as [number, Date, number];
    const own = changeable.get(unitId);
    if (own && isChangeable(own, at.getTime(), placeId)) {
      stored.set(keyOf([unitId, at, placeId]), row);
    }
  }
  const changed: SqlValue[][] = [];
  for (const values of units.flatMap(rowsOf)) {
    const name = keyOf(values.slice(0, key.length));
    const row = stored.get(name);
    stored.delete(name);
    if (!row || !isSame(columns, row, values)) changed.push(values);
  }
  const gone = [...stored.values()].map((row) => key.map((column) => row[column] ?? null));
  await byKeys(
    connection,
    `DELETE FROM ${table} WHERE :keys`,
    key.map((column) => `${column} = ?`).join(' AND '),
    gone,
  );
  await former?.(connection, gone);
  await insertRows(connection, table, columns, changed, columns.slice(key.length));
}

/** Links to a stay that has gone lead to the one that the unit had then. */
async function rememberFormerStays(
  connection: PoolConnection,
  keys: readonly SqlValue[][],
): Promise<void> {
  await insertRows(connection, 'stay_aliases', ['unit_id', 'first_seen_at', 'site_id'], keys);
}

async function writeLastSeen(
  connection: PoolConnection,
  units: readonly FoldedUnit[],
): Promise<void> {
  const rows = units.map((unit) => ({ unit, values: lastSeenValues(unit) }));
  const unseen = rows.filter(({ unit, values }) => !unit.registered && values[1] === NEVER_SEEN);
  await byKeys(
    connection,
    'DELETE FROM last_seen WHERE :keys',
    'unit_id = ?',
    unseen.map(({ unit }) => [unit.start.unitId]),
  );
  const kept = rows.filter((row) => !unseen.includes(row));
  await insertRows(
    connection,
    'last_seen',
    LAST_SEEN_COLUMNS,
    kept.map(({ values }) => values),
    LAST_SEEN_COLUMNS.slice(1),
  );
  const visible = kept.flatMap(({ unit, values }) =>
    unit.registered && unit.ownerId !== null ? [visibleValues(unit.ownerId, values)] : [],
  );
  await insertRows(connection, 'visible_units', VISIBLE_COLUMNS, visible, VISIBLE_COLUMNS.slice(2));
}

async function writeCheckpoints(
  connection: PoolConnection,
  units: readonly FoldedUnit[],
): Promise<void> {
  await byKeys(
    connection,
    'DELETE FROM unit_folds WHERE :keys',
    'unit_id = ? AND (before_at > ? OR NOT opening)',
    units.map(({ start }) => [start.unitId, new Date(start.beforeAt)]),
  );
  const rows = units.flatMap(({ start, history }) =>
    history.checkpoints.map(({ beforeAt, opening, state }) => [
      start.unitId,
      new Date(beforeAt),
      opening,
      JSON.stringify(state),
    ]),
  );
  const columns = ['unit_id', 'before_at', 'opening', 'state'];
  await insertRows(connection, 'unit_folds', columns, rows, columns.slice(2));
}
