import { Router, type Request, type RequestHandler, type Response } from 'express';
import { INGEST_BOUNDS } from '../contract/ingest.js';
import { reportsAnswer, reportsBody, reportsEnvelope } from '../contract/movement-reports.js';
import { tooLarge } from '../errors.js';
import { ingestReports } from '../ingest/ingest-reports.js';
import { defaultIngestLimits, ingestMeter, type IngestLimits } from '../ingest/limits.js';
import type { Context } from '../lib/context.js';
import type { Operation } from '../lib/openapi/operation.js';
import { jsonBody } from '../middleware/json-body.js';
import { reporterOf, requireReporter } from '../middleware/require-reporter.js';
import { validate, validated } from '../middleware/validate.js';

const envelope = { body: reportsEnvelope };

/** The door for other systems' movement reports. Mount it before any body parser. */
export function ingestReportsRoutes(context: Context, limits?: Partial<IngestLimits>): Router {
  const { env, db, clock } = context;
  const bounds = { ...defaultIngestLimits, ...limits };
  const meter = ingestMeter(bounds, 'reports');
  const countRequest: RequestHandler = async (request, _response, next) => {
    await meter.countRequest(reporterOf(request).tokenId);
    next();
  };
  const bytesOf = (request: Request, response: Response) =>
    meter.countBytes(reporterOf(request).tokenId, response);
  // Asked again once the body is in: who lost the token meanwhile reports nothing more.
  const guard = requireReporter(context);
  const router = Router();
  router.post(
    '/ingest/reports',
    guard,
    countRequest,
    jsonBody(INGEST_BOUNDS.bytes, bounds.idleMs, bytesOf),
    guard,
    validate(envelope),
    async (request, response) => {
      const { tokenId, organisation } = reporterOf(request);
      const { source, reports } = validated(request, envelope).body;
      if (reports.length > INGEST_BOUNDS.reads) {
        throw tooLarge(
          `${reports.length} reports; at most ${INGEST_BOUNDS.reads} go in one request.`,
        );
      }
      await meter.countReads(tokenId, reports.length);
      const { retainMonths } = env;
      const facts = { source, reports, receivedAt: clock.now(), retainMonths };
      response.json(await ingestReports(db, { organisationId: organisation.id, ...facts }));
    },
  );
  return router;
}

export const ingestReportsOperations: Operation[] = [
  {
    method: 'post',
    path: '/api/ingest/reports',
    summary:
      "Take in an organisation's movement reports, of anybody's cars and boxes at any site; the first under a source and reference stays",
    access: 'reporter',
    body: reportsBody,
    response: reportsAnswer,
  },
];
