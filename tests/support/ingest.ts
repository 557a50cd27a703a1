import { createHash, randomBytes } from 'node:crypto';
import express, { type Express } from 'express';
import request from 'supertest';
import type { IngestLimits } from '../../server/ingest/limits.js';
import type { Context } from '../../server/lib/context.js';
import type { Database } from '../../server/lib/database.js';
import { problemHandler } from '../../server/middleware/problem.js';
import { requestLog } from '../../server/middleware/request-log.js';
import { modelsOf } from '../../server/models/index.js';
import type { ReadPoint } from '../../server/models/read-point.js';
import type { Site } from '../../server/models/site.js';
import { ingestRoutes } from '../../server/routes/ingest.js';
import { encodeAei } from '../../server/domain/identifiers/aei.js';
import { buildAntenna, buildReadPoint, buildSite } from './factories.js';

/** The ingest door alone, with limits of its own. */
export function buildIngestApp(context: Context, limits: Partial<IngestLimits> = {}): Express {
  const app = express();
  app.use(requestLog(context.logger));
  app.use('/api', ingestRoutes(context, limits));
  app.use(problemHandler(context.logger));
  return app;
}

/** A reader that may send: a site with one read point, one antenna (number 1) and a token. */
export async function buildReader(
  db: Database,
  values: Partial<{ site: Site }> = {},
): Promise<{ site: Site; readPoint: ReadPoint; token: string }> {
  const site = values.site ?? (await buildSite(db));
  const readPoint = await buildReadPoint(db, { site });
  await buildAntenna(db, { readPoint, number: 1 });
  const token = randomBytes(32).toString('base64url');
  await modelsOf(db.sequelize).ReaderToken.create({
    siteId: site.id,
    tokenHash: createHash('sha256').update(token).digest(),
    createdAt: new Date(),
    revokedAt: null,
  });
  // What a service does in its own transaction when it changes the configuration.
  await db.pool.query('UPDATE config_state SET version = version + 1 WHERE id = 1');
  return { site, readPoint, token };
}

/** The tag of a car `QTKX <number>`, left side. */
export const carTag = (number: number) =>
  encodeAei({ groupCode: 19, initial: 'QTKX', number, side: 'left', lengthDm: 170 });

/** Posts to the reads door as JSON. */
export const postReads = (app: Express, token: string, body: object) =>
  request(app).post('/api/ingest/reads').auth(token, { type: 'bearer' }).send(body);

/** Rows of the ledger in order of batch and place, with what their tag was as text. */
export async function storedReads(db: Database) {
  const rows = await db.pool.query<
    {
      batch_id: number;
      seq: number;
      site_id: number;
      antenna_no: number;
      tag: Buffer;
      read_at: Date;
      rssi: number | null;
      read_count: number | null;
      hold_code: string | null;
      config_version: number;
    }[]
  >('SELECT * FROM `reads` ORDER BY batch_id, seq');
  return rows.map((row) => ({ ...row, tag: row.tag.toString() }));
}
