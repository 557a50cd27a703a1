import { Router } from 'express';
import { codeParams } from '../contract/administration.js';
import {
  handReportListAnswer,
  handReportsAnswer,
  handReportsBody,
  handReportsQuery,
  retractionsBody,
} from '../contract/hand-reports.js';
import { ingestHandReports } from '../ingest/ingest-hand-reports.js';
import { retractHandReports } from '../ingest/retract-hand-reports.js';
import type { Context } from '../lib/context.js';
import type { Operation } from '../lib/openapi/operation.js';
import { actorOf, requireUser } from '../middleware/require-user.js';
import { validate, validated } from '../middleware/validate.js';
import { sitePolicy } from '../policies/administration-policy.js';
import { authorize } from '../policies/policy.js';
import { presentHandReport } from '../presenters/hand-report.js';
import { listHandReports } from '../queries/list-hand-reports.js';
import { findSite } from '../queries/list-sites.js';

const list = { params: codeParams, query: handReportsQuery };
const reports = { params: codeParams, body: handReportsBody };
const retractions = { params: codeParams, body: retractionsBody };

/** What people saw at a site with their own eyes, and what they take back of it. */
export function handReportsRoutes(context: Context): Router {
  const { db, clock, env } = context;
  const router = Router();
  const signedIn = requireUser(context);

  router.get('/sites/:code/hand-reports', signedIn, validate(list), async (request, response) => {
    const { params, query } = validated(request, list);
    const site = await findSite(db, params.code);
    authorize(actorOf(request), sitePolicy, 'details', site);
    const { rows, next } = await listHandReports(db, site.id, query);
    response.json({ data: rows.map((row) => presentHandReport(row, true)), next });
  });

  router.post(
    '/sites/:code/hand-reports',
    signedIn,
    validate(reports),
    async (request, response) => {
      const { params, body } = validated(request, reports);
      const site = await findSite(db, params.code);
      const actor = actorOf(request);
      authorize(actor, sitePolicy, 'reportByEye', site);
      const answer = await ingestHandReports(db, {
        siteId: site.id,
        personId: actor.personId,
        track: body.track ?? null,
        reports: body.reports,
        receivedAt: clock.now(),
        retainMonths: env.retainMonths,
      });
      response.json(answer);
    },
  );

  router.post(
    '/sites/:code/hand-reports/retractions',
    signedIn,
    validate(retractions),
    async (request, response) => {
      const { params, body } = validated(request, retractions);
      const site = await findSite(db, params.code);
      const actor = actorOf(request);
      authorize(actor, sitePolicy, 'reportByEye', site);
      const { personId } = actor;
      const input = { siteId: site.id, personId, ids: body.ids, receivedAt: clock.now() };
      response.json(await retractHandReports(db, input));
    },
  );

  return router;
}

export const handReportsOperations: Operation[] = [
  {
    method: 'get',
    path: '/api/sites/:code/hand-reports',
    summary: 'List what was seen by eye at a site, latest first, with what was taken back',
    params: codeParams,
    query: handReportsQuery,
    response: handReportListAnswer,
  },
  {
    method: 'post',
    path: '/api/sites/:code/hand-reports',
    summary:
      "Report cars seen or not there by eye, as a clerk of the site; an id's first report stays",
    params: codeParams,
    body: handReportsBody,
    response: handReportsAnswer,
  },
  {
    method: 'post',
    path: '/api/sites/:code/hand-reports/retractions',
    summary: 'Take reports by eye of this site back, whoever of its people made them',
    params: codeParams,
    body: retractionsBody,
    response: handReportsAnswer,
  },
];
