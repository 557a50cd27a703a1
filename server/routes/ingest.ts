import { Router, type Request, type RequestHandler, type Response } from 'express';
import {
  INGEST_BOUNDS,
  ingestAnswer,
  ndjsonQuery,
  readsBody,
  wheelsBody,
} from '../contract/ingest.js';
import { forbidden, unsupported } from '../errors.js';
import { decodeUtf8, parseJson } from '../ingest/checked-json.js';
import { ingestReads } from '../ingest/ingest-reads.js';
import { ingestWheels } from '../ingest/ingest-wheels.js';
import { defaultIngestLimits, ingestMeter, type IngestLimits } from '../ingest/limits.js';
import { receiveBody } from '../ingest/receive-body.js';
import { readsOfJson, readsOfNdjson, type WireReads } from '../ingest/wire-forms.js';
import type { Context } from '../lib/context.js';
import type { Operation } from '../lib/openapi/operation.js';
import { readerOf, requireReader } from '../middleware/require-reader.js';
import { validate, validated } from '../middleware/validate.js';

const JSON_TYPE = 'application/json';
const NDJSON_TYPE = 'application/x-ndjson';
const ndjson = { query: ndjsonQuery };
const wheels = { body: wheelsBody };

/** The door for readers. It reads bodies itself: mount it before any body parser. */
export function ingestRoutes(context: Context, limits?: Partial<IngestLimits>): Router {
  const router = Router();
  const { env, db, clock } = context;
  const bounds = { ...defaultIngestLimits, ...limits };
  const meter = ingestMeter(bounds);
  const countRequest: RequestHandler = async (request, _response, next) => {
    await meter.countRequest(readerOf(request).tokenId);
    next();
  };
  const receive = (request: Request, response: Response) => {
    const count = meter.countBytes(readerOf(request).tokenId, response);
    return receiveBody(request, bounds.idleMs, INGEST_BOUNDS.bytes, count);
  };
  // Asked again once the body is in: who lost the token meanwhile takes nothing in.
  const guard = requireReader(context);

  const readReads: RequestHandler = async (request, response, next) => {
    request.body = readsOf(request, await receive(request, response));
    next();
  };
  router.post(
    '/ingest/reads',
    guard,
    countRequest,
    validateReadsQuery,
    readReads,
    guard,
    async (request, response) => {
      const { tokenId, site } = readerOf(request);
      const { site: named, reads } = request.body as WireReads;
      requireOwnSite(site.code, named);
      await meter.countReads(tokenId, reads.length);
      const { retainMonths } = env;
      const receivedAt = clock.now();
      response.json(await ingestReads(db, { site, reads, receivedAt, retainMonths }));
    },
  );

  const readJson: RequestHandler = async (request, response, next) => {
    requireType(request, JSON_TYPE);
    request.body = parseJson(decodeUtf8(await receive(request, response)));
    next();
  };
  router.post(
    '/ingest/wheels',
    guard,
    countRequest,
    readJson,
    guard,
    validate(wheels),
    async (request, response) => {
      const { site } = readerOf(request);
      const { body: record } = validated(request, wheels);
      requireOwnSite(site.code, record.site);
      response.json(await ingestWheels(db, { site, record, receivedAt: clock.now() }));
    },
  );

  return router;
}

const validateNdjsonQuery = validate(ndjson);
const validateNoQuery = validate({});

/** Only the line form names its site in the address. */
const validateReadsQuery: RequestHandler = (request, response, next) => {
  const type = requireType(request, JSON_TYPE, NDJSON_TYPE);
  return (type === NDJSON_TYPE ? validateNdjsonQuery : validateNoQuery)(request, response, next);
};

function readsOf(request: Request, bytes: Uint8Array): WireReads {
  if (typeOf(request) === JSON_TYPE) return readsOfJson(bytes);
  return { site: validated(request, ndjson).query.site, reads: readsOfNdjson(bytes) };
}

/** A token speaks for one site; a body that names no site means that one. */
function requireOwnSite(own: string, named: string | undefined): void {
  if (named !== undefined && named !== own) {
    throw forbidden(`This token belongs to the site ${own}.`);
  }
}

function typeOf(request: Request): string {
  return (request.headers['content-type'] ?? '').split(';')[0]?.trim().toLowerCase() ?? '';
}

function requireType(request: Request, ...allowed: string[]): string {
  const type = typeOf(request);
  const [, charset = 'utf-8'] =
    /;\s*charset="?([^";\s]*)/i.exec(request.headers['content-type'] ?? '') ?? [];
  const encoding = request.headers['content-encoding'] ?? 'identity';
  const isPlainUtf8 = /^utf-?8$/i.test(charset) && encoding.toLowerCase() === 'identity';
  if (allowed.includes(type) && isPlainUtf8) return type;
  throw unsupported(`Send ${allowed.join(' or ')} in UTF-8, not compressed.`);
}

export const ingestOperations: Operation[] = [
  {
    method: 'post',
    path: '/api/ingest/reads',
    summary: 'Take in reads of one site (application/x-ndjson with ?site= too, one read a line)',
    access: 'reader',
    query: ndjsonQuery,
    body: readsBody,
    response: ingestAnswer,
  },
  {
    method: 'post',
    path: '/api/ingest/wheels',
    summary: 'Take in a train counted by wheel sensors',
    access: 'reader',
    body: wheelsBody,
    response: ingestAnswer,
  },
];
