import type { Express } from 'express';
import request from 'supertest';
import type { Context } from '../../server/lib/context.js';
import type { Database } from '../../server/lib/database.js';
import type { Organisation } from '../../server/models/organisation.js';
import { replaceReportToken } from '../../server/services/replace-report-token.js';
import { buildOrganisation } from './factories.js';

/** An organisation that may report, with its token. */
export async function buildReporter(
  context: Context,
): Promise<{ organisation: Organisation; token: string }> {
  const organisation = await buildOrganisation(context.db, { kind: 'railroad' });
  return { organisation, token: await replaceReportToken(context, organisation.id) };
}

/** Posts to the door for movement reports as JSON; `app` may be the address of a server. */
export const postReports = (app: Express | string, token: string, body: object) =>
  request(app).post('/api/ingest/reports').auth(token, { type: 'bearer' }).send(body);

/** Movement reports as they are stored, by reference. */
export function storedReports(db: Database) {
  return db.pool.query<
    {
      organisation_id: number;
      source: string;
      reference: string;
      unit_compact: string;
      event: string;
      at: Date;
      site_id: number;
    }[]
  >('SELECT * FROM movement_reports ORDER BY organisation_id, source, reference');
}

/** What waits for the projector about reports: units with the instant they are dirty from. */
export async function queuedReports(db: Database): Promise<[unit: string, at: string][][]> {
  const rows = await db.pool.query<{ payload: string; lane: number; read_count: number }[]>(
    "SELECT payload, lane, read_count FROM work WHERE kind = 'reports' ORDER BY id",
  );
  return rows.map(({ payload }) => (JSON.parse(payload) as { units: [string, string][] }).units);
}
