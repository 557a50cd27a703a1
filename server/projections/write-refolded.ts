import type { PoolConnection } from 'mariadb';
import type { Passage } from '../domain/movements/passages.js';
import { isUndirected } from '../domain/movements/passes.js';
import type { PassStart, Refolded } from '../domain/movements/refold-point.js';
import { byKeys, insertRows, type SqlValue } from '../lib/bulk.js';
import { passKeyOf, passOfRow, type Changes } from './changes.js';
import {
  PASSAGE_COLUMNS,
  PASS_COLUMNS,
  passageValues,
  passValues,
  strayValues,
  type PassageRow,
  type PassRow,
} from './passage-rows.js';
import { startOf, type Window } from './point-window.js';
import { isSame } from './same-row.js';

/** Writes what came out otherwise in a stretch of a read point, and notes it. */
export async function writeRefolded(
  connection: PoolConnection,
  readPointId: number,
  window: Window,
  refolded: Refolded,
  changes: Changes,
): Promise<void> {
  await writePassages(connection, readPointId, window, refolded, changes);
  await writePasses(connection, readPointId, window, refolded, changes);
}

async function writePassages(
  connection: PoolConnection,
  readPointId: number,
  window: Window,
  { passes, strays, settledAt }: Refolded,
  changes: Changes,
): Promise<void> {
  const stored = new Map<string, PassageRow>();
  for (const row of window.passages) {
    if (isReplaced(row, settledAt)) {
      stored.set(`${row.first_at.getTime()} ${row.unit_id}`, row);
    }
  }
  const notePass = (row: PassageRow) => {
    const key = passOfRow(row);
    if (key) changes.pass(key);
  };
  const changed: SqlValue[][] = [];
  const write = ({ unit, first }: Passage, values: SqlValue[]): boolean => {
    const key = `${first.at} ${unit}`;
    const row = stored.get(key);
    stored.delete(key);
    if (row && isSame(PASSAGE_COLUMNS, row, values)) return false;
    changed.push(values);
    changes.passage({
      unit_id: unit as number,
      read_point_id: readPointId,
      first_at: new Date(first.at),
      first_antenna: first.antenna,
      first_tag: Buffer.from(first.tag),
    });
    if (row) notePass(row);
    return true;
  };
  for (const pass of passes) {
    const key = { readPointId, startedAt: pass.startedAt, ordinal: pass.ordinal };
    for (const member of pass.members) {
      if (!write(member.passage, passageValues(readPointId, pass, member))) continue;
      changes.pass(key);
      if (isUndirected(pass)) changes.vote(key);
    }
  }
  for (const stray of strays) write(stray.passage, strayValues(readPointId, stray));
  for (const row of stored.values()) {
    changes.passage(row);
    notePass(row);
  }
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
  changes: Changes,
): Promise<void> {
  const keyOf = ({ startedAt, ordinal }: Pick<PassStart, 'startedAt' | 'ordinal'>) =>
    passKeyOf({ readPointId, startedAt, ordinal });
  const stored = new Map<string, PassRow>();
  for (const row of window.passes) {
    if (isBefore(row.started_at, row.ordinal, settledAt)) stored.set(keyOf(startOf(row)), row);
  }
  const changed = passes.flatMap((pass) => {
    const values = passValues(readPointId, pass);
    const row = stored.get(keyOf(pass));
    stored.delete(keyOf(pass));
    if (row && isSame(PASS_COLUMNS, row, values)) return [];
    if (isUndirected(pass))
      changes.vote({ readPointId, startedAt: pass.startedAt, ordinal: pass.ordinal });
    return [values];
  });
  await byKeys(
    connection,
    'DELETE FROM passes WHERE :keys',
    'read_point_id = ? AND started_at = ? AND ordinal = ?',
    [...stored.values()].map((row) => [readPointId, row.started_at, row.ordinal]),
  );
  await insertRows(connection, 'passes', PASS_COLUMNS, changed, PASS_COLUMNS.slice(3));
  await rememberFormerIds(connection, window, [...stored.values()]);
}

/** Links to a pass that has gone lead to the one that its first unit went by in. */
async function rememberFormerIds(
  connection: PoolConnection,
  window: Window,
  gone: readonly PassRow[],
): Promise<void> {
  const aliases = gone.flatMap((row) => {
    const first = window.passages.find(
      (passage) =>
        passage.pass_started_at?.getTime() === row.started_at.getTime() &&
        passage.pass_ordinal === row.ordinal &&
        passage.first_at.getTime() === row.started_at.getTime(),
    );
    return first ? [[row.read_point_id, row.started_at, row.ordinal, first.unit_id]] : [];
  });
  const columns = ['read_point_id', 'started_at', 'ordinal', 'unit_id'];
  await insertRows(connection, 'pass_aliases', columns, aliases, columns.slice(3));
}

function isReplaced(row: PassageRow, settledAt: PassStart | null): boolean {
  if (row.pass_started_at !== null && row.pass_ordinal !== null) {
    return isBefore(row.pass_started_at, row.pass_ordinal, settledAt);
  }
  return !settledAt || row.first_at.getTime() < settledAt.startedAt;
}

function isBefore(startedAt: Date, ordinal: number, settledAt: PassStart | null): boolean {
  if (!settledAt) return true;
  const difference = startedAt.getTime() - settledAt.startedAt;
  return difference < 0 || (difference === 0 && ordinal < settledAt.ordinal);
}
