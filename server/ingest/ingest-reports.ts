import type { PoolConnection } from 'mariadb';
import { codeSchema } from '../contract/common.js';
import type { ReportsAnswer } from '../contract/movement-reports.js';
import { inParts, insertRows } from '../lib/bulk.js';
import { withTransaction, type Database } from '../lib/database.js';
import { asUnavailable } from './as-unavailable.js';
import { doorClock } from './hold-of.js';
import { judgeReport, type ReportProblem, type SoundReport } from './judge-report.js';
import { fillReports, openReports } from './queue-reports.js';

export interface ReportsInput {
  organisationId: number;
  source: string;
  /** As they came over the wire: each is judged by itself. 5,000 at most. */
  reports: unknown[];
  receivedAt: Date;
  /** Months that history is kept open for. */
  retainMonths: number;
}

type PlacedReport = SoundReport & { siteId: number };

interface StoredReport {
  reference: string;
  unit_compact: string;
  event: string;
  at: Date;
  site_id: number;
  batch_id: number;
}

/**
 * Takes movement reports of one organisation in and answers for each of them, after the commit.
 * The first report under a source and reference stays. Throws a 503 problem when the database is
 * away; nothing is stored then, or the answer was lost and sending again finds duplicates.
 */
export async function ingestReports(db: Database, input: ReportsInput): Promise<ReportsAnswer> {
  const clock = doorClock(input.receivedAt, input.retainMonths);
  const judged = input.reports.map((raw, index) => judgeReport(raw, index, clock));
  const sound = judged.filter((report) => 'atMs' in report);
  const rejected = judged.filter((report) => 'code' in report);
  if (sound.length === 0) return answer(rejected, []);
  return asUnavailable(() =>
    withTransaction(db.pool, async (connection) => {
      const siteIds = await siteIdsOf(connection, sound);
      const placed = sound.flatMap((report) => {
        const siteId = siteIds.get(report.site);
        return siteId === undefined ? [] : [{ ...report, siteId }];
      });
      const strange = sound.filter(({ site }) => !siteIds.has(site)).map(unknownSite);
      return answer([...rejected, ...strange], await store(connection, input, placed));
    }),
  );
}

async function siteIdsOf(
  connection: PoolConnection,
  reports: SoundReport[],
): Promise<Map<string, number>> {
  const codes = [...new Set(reports.map(({ site }) => site))].filter(isCode);
  if (codes.length === 0) return new Map();
  const rows = await connection.query<{ id: number; code: string }[]>(
    `SELECT id, code FROM sites WHERE code IN (${codes.map(() => '?').join()})`,
    codes,
  );
  return new Map(rows.map(({ id, code }) => [code, id]));
}

const isCode = (text: string): boolean => codeSchema.safeParse(text).success;

const unknownSite = ({ index }: SoundReport): ReportProblem => ({
  index,
  code: 'unknown-site',
  detail: 'No site has this code.',
});

type Fate = 'accepted' | 'duplicate' | ReportProblem;

/** What became of each report, in the order of the request. */
async function store(
  connection: PoolConnection,
  input: ReportsInput,
  reports: PlacedReport[],
): Promise<Fate[]> {
  if (reports.length === 0) return [];
  const { receivedAt } = input;
  const batchId = await openReports(connection, receivedAt);
  await insert(connection, input, reports, batchId);
  const stored = await readBack(connection, input, reports);
  const taken = new Set<string>();
  const units: { unit: string; at: Date }[] = [];
  const fates = reports.map((report): Fate => {
    const first = stored.get(report.reference);
    if (first?.batch_id === batchId && !taken.has(report.reference)) {
      taken.add(report.reference);
      units.push({ unit: report.unit, at: new Date(report.atMs) });
      return 'accepted';
    }
    return first && isSame(report, first) ? 'duplicate' : differing(report);
  });
  await fillReports(connection, { batchId, receivedAt, units });
  return fates;
}

/** Of reports under one reference the first; what is there already stays as it is. */
async function insert(
  connection: PoolConnection,
  { organisationId, source, receivedAt }: ReportsInput,
  reports: PlacedReport[],
  batchId: number,
): Promise<void> {
  const firsts = new Map(reports.toReversed().map((report) => [report.reference, report]));
  const rows = [...firsts.values()].sort(byReference).map((report) => {
    const { reference, unit, event, atMs, siteId } = report;
    const fact = [unit, event, new Date(atMs), siteId, receivedAt, batchId];
    return [organisationId, source, reference, ...fact];
  });
  await insertRows(connection, 'movement_reports', columns, rows);
}

const columns = [
  'organisation_id',
  'source',
  'reference',
  'unit_compact',
  'event',
  'at',
  'site_id',
  'received_at',
  'batch_id',
];

/** The order of the unique key, so that two writers never wait for each other in a circle. */
const byReference = (a: PlacedReport, b: PlacedReport): number =>
  Buffer.compare(Buffer.from(a.reference), Buffer.from(b.reference));

async function readBack(
  connection: PoolConnection,
  { organisationId, source }: ReportsInput,
  reports: PlacedReport[],
): Promise<Map<string, StoredReport>> {
  const stored = new Map<string, StoredReport>();
  for (const part of inParts([...new Set(reports.map(({ reference }) => reference))], 500)) {
    const rows = await connection.query<StoredReport[]>(
      `SELECT reference, unit_compact, event, at, site_id, batch_id FROM movement_reports
        WHERE organisation_id = ? AND source = ? AND reference IN (${part.map(() => '?').join()})`,
      [organisationId, source, ...part],
    );
    for (const row of rows) stored.set(row.reference, row);
  }
  return stored;
}

const isSame = (report: PlacedReport, stored: StoredReport): boolean =>
  report.unit === stored.unit_compact &&
  report.event === stored.event &&
  report.atMs === stored.at.getTime() &&
  report.siteId === stored.site_id;

const differing = ({ index }: PlacedReport): ReportProblem => ({
  index,
  code: 'duplicate',
  detail: 'This reference came before with another report, which stays. Give this one its own.',
});

function answer(rejected: ReportProblem[], fates: Fate[]): ReportsAnswer {
  const accepted = fates.filter((fate) => fate === 'accepted').length;
  const differed = fates.filter((fate) => typeof fate === 'object');
  return {
    accepted,
    duplicates: fates.length - accepted,
    rejected: rejected.length,
    problems: [...rejected, ...differed].sort((a, b) => a.index - b.index),
  };
}
