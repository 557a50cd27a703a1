import type { PoolConnection } from 'mariadb';
import type { Network, ReadPointConfiguration } from '../domain/movements/configuration.js';
import type { Pass } from '../domain/movements/passes.js';
import { refoldPoint, type PassStart, type Refolded } from '../domain/movements/refold-point.js';
import type { Visit } from '../domain/movements/visits.js';
import { byKeys, insertRows, type SqlValue } from '../lib/bulk.js';
import { loadWheels, loadWindow, startOf, startOfWindow, type Window } from './point-window.js';
import { isSame } from './same-row.js';
import {
  PASSAGE_COLUMNS,
  PASS_COLUMNS,
  passageValues,
  passValues,
  visitsOfRow,
  type PassageRow,
  type PassRow,
} from './passage-rows.js';

/** New facts of one read point. */
export interface FreshFacts {
  visits: Visit[];
  /** Earliest and latest instant that they can bear on, ms. */
  since: number;
  until: number;
}

/** Units whose sightings changed, and the earliest change of each (ms). */
export type DirtyUnits = Map<number, number>;

const MINUTE_MS = 60_000;
const FIRST_REACH_MS = 10 * MINUTE_MS;
const REACH_GROWTH = 8;

/** Folds new facts into a read point's passages and passes, and marks the units it changed. */
export async function foldPoint(
  connection: PoolConnection,
  network: Network,
  point: ReadPointConfiguration,
  facts: FreshFacts,
  dirty: DirtyUnits,
): Promise<void> {
  const from = await startOfWindow(connection, network, point, facts.since);
  for (let reach = FIRST_REACH_MS; ; reach *= REACH_GROWTH) {
    const until = facts.until + reach;
    const window = await loadWindow(connection, point.id, from, until);
    const refolded = await refold(connection, network, point, facts, window);
    if (!refolded.settledAt && !window.complete) continue;
    await writePassages(connection, point.id, window, refolded, dirty);
    await writePasses(connection, point.id, window, refolded);
    return;
  }
}

async function refold(
  connection: PoolConnection,
  network: Network,
  point: ReadPointConfiguration,
  facts: FreshFacts,
  window: Window,
): Promise<Refolded> {
  const firsts = window.passages.map((row) => row.first_at.getTime());
  const lasts = window.passages.map((row) => row.last_at.getTime());
  const since = Math.min(facts.since, ...firsts);
  const until = Math.max(facts.until, ...lasts);
  const wheels = await loadWheels(connection, point.id, since, until);
  return refoldPoint(
    { network, point, wheels },
    {
      from: window.from,
      visits: window.passages.flatMap(visitsOfRow),
      fresh: facts.visits,
      changedUntil: facts.until,
      starts: window.passes.map(startOf),
    },
  );
}

async function writePassages(
  connection: PoolConnection,
  readPointId: number,
  window: Window,
  { passes, settledAt }: Refolded,
  dirty: DirtyUnits,
): Promise<void> {
  const stored = new Map<string, PassageRow>();
  for (const row of window.passages) {
    if (isBefore(row.pass_started_at, row.pass_ordinal, settledAt)) {
      stored.set(`${row.first_at.getTime()} ${row.unit_id}`, row);
    }
  }
  const changed: SqlValue[][] = [];
  for (const pass of passes) {
    for (const member of pass.members) {
      const values = passageValues(readPointId, pass, member);
      const key = `${member.passage.first.at} ${member.passage.unit}`;
      const row = stored.get(key);
      stored.delete(key);
      if (row && isSame(PASSAGE_COLUMNS, row, values)) continue;
      changed.push(values);
      markDirty(dirty, member.passage.unit as number, member.passage.first.at);
    }
  }
  for (const row of stored.values()) markDirty(dirty, row.unit_id, row.first_at.getTime());
  await byKeys(
    connection,
    'DELETE FROM passages WHERE :keys',
    'read_point_id = ? AND first_at = ? AND unit_id = ?',
    [...stored.values()].map((row) => [readPointId, row.first_at, row.unit_id]),
  );
  await insertRows(connection, 'passages', PASSAGE_COLUMNS, changed, PASSAGE_COLUMNS.slice(3));
}

async function writePasses(
  connection: PoolConnection,
  readPointId: number,
  window: Window,
  { passes, settledAt }: Refolded,
): Promise<void> {
  const stored = new Map<string, PassRow>();
  for (const row of window.passes) {
    if (isBefore(row.started_at, row.ordinal, settledAt)) {
      stored.set(passKey(startOf(row)), row);
    }
  }
  const changed = passes.flatMap((pass) => {
    const values = passValues(readPointId, pass);
    const row = stored.get(passKey(pass));
    stored.delete(passKey(pass));
    return row && isSame(PASS_COLUMNS, row, values) ? [] : [values];
  });
  await byKeys(
    connection,
    'DELETE FROM passes WHERE :keys',
    'read_point_id = ? AND started_at = ? AND ordinal = ?',
    [...stored.values()].map((row) => [readPointId, row.started_at, row.ordinal]),
  );
  await insertRows(connection, 'passes', PASS_COLUMNS, changed, PASS_COLUMNS.slice(3));
}

function passKey({ startedAt, ordinal }: Pick<Pass, 'startedAt' | 'ordinal'>): string {
  return `${startedAt} ${ordinal}`;
}

function isBefore(startedAt: Date, ordinal: number, settledAt: PassStart | null): boolean {
  if (!settledAt) return true;
  const difference = startedAt.getTime() - settledAt.startedAt;
  return difference < 0 || (difference === 0 && ordinal < settledAt.ordinal);
}

/** Marks a unit for the second stage from `at` (ms) on, or from an earlier instant already marked. */
export function markDirty(dirty: DirtyUnits, unitId: number, at: number): void {
  dirty.set(unitId, Math.min(dirty.get(unitId) ?? Infinity, at));
}
