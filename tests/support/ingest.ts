import { createHash, randomBytes } from 'node:crypto';
import type { Express } from 'express';
import request from 'supertest';
import { createApp } from '../../server/app.js';
import { encodeAei } from '../../server/domain/identifiers/aei.js';
import type { IngestLimits } from '../../server/ingest/limits.js';
import type { Context } from '../../server/lib/context.js';
import type { Database } from '../../server/lib/database.js';
import { modelsOf } from '../../server/models/index.js';
import type { ReadPoint } from '../../server/models/read-point.js';
import type { Site } from '../../server/models/site.js';
import { buildAntenna, buildReadPoint, buildSite } from './factories.js';

/** The whole web server, with limits of its own at the ingest door. */
export const buildIngestApp = (context: Context, ingest: Partial<IngestLimits> = {}): Express =>
  createApp(context, { limits: { ingest }, clientDirectory: null });

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
