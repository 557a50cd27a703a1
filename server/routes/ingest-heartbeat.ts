import { Router, type Request, type RequestHandler, type Response } from 'express';
import { heartbeatBody } from '../contract/heartbeat.js';
import { forbidden } from '../errors.js';
import { ingestHeartbeat } from '../ingest/ingest-heartbeat.js';
import { defaultIngestLimits, ingestMeter, type IngestLimits } from '../ingest/limits.js';
import type { Context } from '../lib/context.js';
import type { Operation } from '../lib/openapi/operation.js';
import { jsonBody } from '../middleware/json-body.js';
import { readerOf, requireReader } from '../middleware/require-reader.js';
import { validate, validated } from '../middleware/validate.js';

const beat = { body: heartbeatBody };
const MOST_BYTES = 100_000;

/** The door for what readers say of themselves. Mount it before any body parser. */
export function ingestHeartbeatRoutes(context: Context, limits?: Partial<IngestLimits>): Router {
  const { db, clock } = context;
  const bounds = { ...defaultIngestLimits, ...limits };
  const meter = ingestMeter(bounds);
  const countRequest: RequestHandler = async (request, _response, next) => {
    await meter.countRequest(readerOf(request).tokenId);
    next();
  };
  const bytesOf = (request: Request, response: Response) =>
    meter.countBytes(readerOf(request).tokenId, response);
  // Asked again once the body is in: who lost the token meanwhile says nothing more.
  const guard = requireReader(context);
  const router = Router();
  router.post(
    '/ingest/heartbeat',
    guard,
    countRequest,
    jsonBody(MOST_BYTES, bounds.idleMs, bytesOf),
    guard,
    validate(beat),
    async (request, response) => {
      const { site } = readerOf(request);
      const { body: heartbeat } = validated(request, beat);
      if (heartbeat.site !== undefined && heartbeat.site !== site.code) {
        throw forbidden(`This token belongs to the site ${site.code}.`);
      }
      await ingestHeartbeat(db, { siteId: site.id, heartbeat, receivedAt: clock.now() });
      response.status(204).end();
    },
  );
  return router;
}

export const ingestHeartbeatOperations: Operation[] = [
  {
    method: 'post',
    path: '/api/ingest/heartbeat',
    summary: "Tell a reader's clock and how its antennas are; the last word stays",
    access: 'reader',
    body: heartbeatBody,
  },
];
