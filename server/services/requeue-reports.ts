import type { Transaction } from 'sequelize';
import { byKeys, inParts, insertRows, type SqlValue } from '../lib/bulk.js';
import { connectionOf } from '../lib/connection-of.js';
import { FAR } from '../lib/sentinels.js';
import { markUnitsDirty } from './mark-units-dirty.js';
import type { NamingChange } from './naming-change.js';

const REPORTS_A_ROW = 500;
const LATE_LANE = 1;

interface ReportRow {
  unit_compact: string;
  at: Date;
}

/**
 * Has the projector take up again what was reported of numbers that now name another unit: those
 * that it named lose it, those that it names get it, and one that nobody has is made.
 */
export async function requeueReports(
  transaction: Transaction,
  changes: readonly NamingChange[],
  now: Date,
): Promise<void> {
  const connection = connectionOf(transaction);
  const numbers = changes.filter(({ kind }) => kind === 'identity');
  const keys = numbers.map(({ value, validFrom, validTo }): SqlValue[] => [
    value,
    validFrom ?? new Date(0),
    validTo ?? FAR,
  ]);
  const rows: ReportRow[] = [];
  for (const table of ['movement_reports', 'hand_reports']) {
    const statement = `SELECT DISTINCT unit_compact, at FROM ${table} WHERE :keys`;
    const condition = 'unit_compact = ? AND at >= ? AND at < ?';
    rows.push(...(await byKeys<ReportRow>(connection, statement, condition, keys)));
  }
  if (rows.length === 0) return;
  const reported = new Set(rows.map((row) => row.unit_compact));
  const concerned = numbers.filter(({ value }) => reported.has(value));
  await markUnitsDirty(transaction, [...new Set(concerned.flatMap(({ unitIds }) => unitIds))]);
  const payloads = inParts(rows, REPORTS_A_ROW).map((part) =>
    JSON.stringify({ units: part.map(({ unit_compact, at }) => [unit_compact, at]) }),
  );
  await insertRows(
    connection,
    'work',
    ['kind', 'lane', 'read_count', 'payload', 'received_at'],
    payloads.map((payload) => ['reports', LATE_LANE, 0, payload, now]),
  );
}
