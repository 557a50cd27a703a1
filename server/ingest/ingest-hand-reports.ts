import type { PoolConnection } from 'mariadb';
import type {
  HandReportInput,
  HandReportProblemCode,
  HandReportsAnswer,
} from '../contract/hand-reports.js';
import { insertRows } from '../lib/bulk.js';
import { withTransaction, type Database } from '../lib/database.js';
import { asUnavailable } from './as-unavailable.js';
import { doorClock } from './hold-of.js';
import { faultOfTime, timeDetails } from './judge-report.js';
import { fillReports, openReports } from './queue-reports.js';

export interface HandReportsInput {
  siteId: number;
  personId: number;
  track: string | null;
  /** 500 at most. */
  reports: HandReportInput[];
  receivedAt: Date;
  /** Months that history is kept open for. */
  retainMonths: number;
}

interface StoredReport {
  id: string;
  site_id: number;
  track: string | null;
  unit_compact: string;
  at: Date;
  position: number | null;
  seen: number;
  batch_id: number;
}

type Fate = 'accepted' | 'duplicate' | { code: HandReportProblemCode; detail: string };

/**
 * Takes what somebody saw at a site and answers for each report, after the commit. A repeat under
 * one id is a duplicate, also one that was taken back since; another report under it is refused.
 */
export async function ingestHandReports(
  db: Database,
  input: HandReportsInput,
): Promise<HandReportsAnswer> {
  const clock = doorClock(input.receivedAt, input.retainMonths);
  const fates = new Map<HandReportInput, Fate>();
  for (const report of input.reports) {
    const code = faultOfTime(report.at.getTime(), clock);
    if (code) fates.set(report, { code, detail: timeDetails[code] });
  }
  const timely = input.reports.filter((report) => !fates.has(report));
  const stored = timely.length === 0 ? [] : await store(db, input, timely);
  for (const [report, fate] of stored) fates.set(report, fate);
  return answerHandReports(input.reports.flatMap((report) => fates.get(report) ?? []));
}

/** The answer that says what became of each. */
export function answerHandReports(fates: Fate[]): HandReportsAnswer {
  const problems = fates.flatMap((fate, index) =>
    typeof fate === 'object' ? [{ index, ...fate }] : [],
  );
  return {
    accepted: fates.filter((fate) => fate === 'accepted').length,
    duplicates: fates.filter((fate) => fate === 'duplicate').length,
    rejected: problems.length,
    problems,
  };
}

function store(
  db: Database,
  input: HandReportsInput,
  reports: HandReportInput[],
): Promise<[HandReportInput, Fate][]> {
  const { receivedAt } = input;
  return asUnavailable(() =>
    withTransaction(db.pool, async (connection) => {
      const batchId = await openReports(connection, receivedAt);
      await insert(connection, input, reports, batchId);
      const stored = await readBack(connection, reports);
      const taken = new Set<string>();
      const fates = reports.map((report): [HandReportInput, Fate] => {
        const first = stored.get(report.id);
        if (first?.batch_id === batchId && !taken.has(report.id)) {
          taken.add(report.id);
          return [report, 'accepted'];
        }
        return [report, first && isSame(input, report, first) ? 'duplicate' : conflict];
      });
      const units = fates.flatMap(([report, fate]) => (fate === 'accepted' ? [report] : []));
      await fillReports(connection, { batchId, receivedAt, units });
      return fates;
    }),
  );
}

const conflict = {
  code: 'conflict',
  detail: 'Another report has this id; it stays. Give this one its own.',
} as const;

/** Of reports under one id the first; what is there already stays as it is. */
async function insert(
  connection: PoolConnection,
  { siteId, personId, track, receivedAt }: HandReportsInput,
  reports: HandReportInput[],
  batchId: number,
): Promise<void> {
  const firsts = new Map(reports.toReversed().map((report) => [report.id, report]));
  // The order of the key, so that two writers never wait for each other in a circle.
  const sorted = [...firsts.values()].sort((a, b) => (a.id < b.id ? -1 : 1));
  const rows = sorted.map(({ id, unit, at, position, seen }) => {
    const fact = [track, unit, at, position ?? null, seen];
    return [id, siteId, ...fact, personId, receivedAt, batchId];
  });
  await insertRows(connection, 'hand_reports', columns, rows);
}

const columns = [
  'id',
  'site_id',
  'track',
  'unit_compact',
  'at',
  'position',
  'seen',
  'reported_by',
  'received_at',
  'batch_id',
];

async function readBack(
  connection: PoolConnection,
  reports: HandReportInput[],
): Promise<Map<string, StoredReport>> {
  const rows = await connection.query<StoredReport[]>(
    `SELECT id, site_id, track, unit_compact, at, position, seen, batch_id FROM hand_reports
      WHERE id IN (${reports.map(() => '?').join()})`,
    reports.map(({ id }) => id),
  );
  return new Map(rows.map((row) => [row.id, row]));
}

const isSame = (
  { siteId, track }: HandReportsInput,
  { unit, at, position, seen }: HandReportInput,
  stored: StoredReport,
): boolean =>
  siteId === stored.site_id &&
  track === stored.track &&
  unit === stored.unit_compact &&
  at.getTime() === stored.at.getTime() &&
  (position ?? null) === stored.position &&
  seen === Boolean(stored.seen);
