import type { HandReportsAnswer } from '../contract/hand-reports.js';
import { insertRows } from '../lib/bulk.js';
import { withTransaction, type Database } from '../lib/database.js';
import { asUnavailable } from './as-unavailable.js';
import { answerHandReports } from './ingest-hand-reports.js';
import { fillReports, openReports } from './queue-reports.js';

export interface RetractionsInput {
  siteId: number;
  personId: number;
  /** 500 at most. */
  ids: string[];
  receivedAt: Date;
}

interface FoundReport {
  id: string;
  unit_compact: string;
  at: Date;
  retracted: number;
}

/**
 * Takes reports of one site back, whoever of its people made them: the next shift puts right what
 * the last one ticked. Once taken back a report stays so; ids of other sites are unknown here.
 */
export async function retractHandReports(
  db: Database,
  { siteId, personId, ids, receivedAt }: RetractionsInput,
): Promise<HandReportsAnswer> {
  return asUnavailable(() =>
    withTransaction(db.pool, async (connection) => {
      // The lock makes two who take the same report back wait for each other.
      const found = await connection.query<FoundReport[]>(
        `SELECT h.id, h.unit_compact, h.at, r.report_id IS NOT NULL AS retracted
           FROM hand_reports h LEFT JOIN hand_retractions r ON r.report_id = h.id
          WHERE h.id IN (${ids.map(() => '?').join()}) AND h.site_id = ?
          ORDER BY h.id FOR UPDATE`,
        [...ids, siteId],
      );
      const known = new Map(found.map((row) => [row.id, row]));
      const fresh = found.filter(({ retracted }) => !retracted);
      if (fresh.length > 0) {
        const rows = fresh.map(({ id }) => [id, personId, receivedAt]);
        await insertRows(connection, 'hand_retractions', columns, rows);
        const batchId = await openReports(connection, receivedAt);
        const units = fresh.map(({ unit_compact: unit, at }) => ({ unit, at }));
        await fillReports(connection, { batchId, receivedAt, units });
      }
      const taken = new Set<string>();
      return answerHandReports(
        ids.map((id) => {
          const report = known.get(id);
          if (!report) return { code: 'unknown', detail: 'This site has no such report.' } as const;
          if (report.retracted || taken.has(id)) return 'duplicate';
          taken.add(id);
          return 'accepted';
        }),
      );
    }),
  );
}

const columns = ['report_id', 'retracted_by', 'retracted_at'];
