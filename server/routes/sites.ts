import { Router } from 'express';
import {
  readerTokenView,
  recordOf,
  siteView,
  storedOf,
} from '../contract/administration-answers.js';
import { batchOfSchema, codeParams, siteInput } from '../contract/administration.js';
import { dataOf, pageOf, pageQuery } from '../contract/common.js';
import type { HeartbeatView } from '../contract/heartbeat.js';
import type { Context } from '../lib/context.js';
import type { Operation } from '../lib/openapi/operation.js';
import { administrationBody } from '../middleware/administration-body.js';
import { requireAdministrator } from '../middleware/require-role.js';
import { actorOf, requireUser } from '../middleware/require-user.js';
import { batchOf, validateBatch } from '../middleware/validate-batch.js';
import { validate, validated } from '../middleware/validate.js';
import type { Site } from '../models/site.js';
import type { Actor } from '../policies/actor.js';
import { changes, sitePolicy } from '../policies/administration-policy.js';
import { authorize, permissions } from '../policies/policy.js';
import { presentSite } from '../presenters/administration.js';
import { presentHeartbeat } from '../presenters/heartbeat.js';
import { loadHeartbeats } from '../queries/load-heartbeats.js';
import { findSite, findSites, listSites } from '../queries/list-sites.js';
import { removeSite } from '../services/remove-site.js';
import { replaceReaderToken } from '../services/replace-reader-token.js';
import { upsertSites } from '../services/upsert-sites.js';

const list = { query: pageQuery };
const one = { params: codeParams };

/** Sites: everybody signed in sees their names, those who work there all of it. */
export function sitesRoutes(context: Context): Router {
  const { db } = context;
  const router = Router();
  const signedIn = requireUser(context);

  router.get('/sites', signedIn, validate(list), async (request, response) => {
    const actor = actorOf(request);
    const { rows, next } = await listSites(db, validated(request, list).query);
    const heartbeats = await heartbeatsFor(context, actor, rows);
    const data = rows.map((site) => {
      return presentSite(site, sitePolicy.details(actor, site), heartbeats.get(site.id));
    });
    response.json({ data, next });
  });

  router.post(
    '/sites',
    signedIn,
    requireAdministrator,
    administrationBody,
    validateBatch(siteInput),
    async (request, response) => {
      const batch = batchOf(request, siteInput);
      await upsertSites(db, batch, actorOf(request).personId);
      const sites = await findSites(
        db,
        batch.items.map((item) => item.code),
      );
      const data = sites.map((site) => presentSite(site, true));
      response.json({ data: batch.isList ? data : data[0] });
    },
  );

  router.get('/sites/:code', signedIn, validate(one), async (request, response) => {
    const actor = actorOf(request);
    const site = await findSite(db, validated(request, one).params.code);
    authorize(actor, sitePolicy, 'see', site);
    const heartbeats = await heartbeatsFor(context, actor, [site]);
    const details = sitePolicy.details(actor, site);
    const data = presentSite(site, details, heartbeats.get(site.id));
    response.json({ data, can: permissions(actor, sitePolicy, changes, site) });
  });

  router.delete('/sites/:code', signedIn, validate(one), async (request, response) => {
    const site = await findSite(db, validated(request, one).params.code);
    authorize(actorOf(request), sitePolicy, 'delete', site);
    await removeSite(db, site.id);
    response.status(204).end();
  });

  router.post('/sites/:code/reader-token', signedIn, validate(one), async (request, response) => {
    const site = await findSite(db, validated(request, one).params.code);
    authorize(actorOf(request), sitePolicy, 'replaceToken', site);
    response.status(201).json({ data: { token: await replaceReaderToken(context, site.id) } });
  });

  return router;
}

/** The last word of the readers at those of the sites where the person may hear it, by site id. */
async function heartbeatsFor(
  { db }: Context,
  actor: Actor,
  sites: Site[],
): Promise<Map<number, HeartbeatView | null>> {
  const ids = sites.filter((site) => sitePolicy.heartbeat(actor, site)).map(({ id }) => id);
  const rows = await loadHeartbeats(db, ids);
  return new Map(ids.map((id) => [id, presentHeartbeat(rows.get(id))]));
}

export const sitesOperations: Operation[] = [
  {
    method: 'get',
    path: '/api/sites',
    summary: 'List sites by code: names, and all of those one works at',
    query: pageQuery,
    response: pageOf(siteView),
  },
  {
    method: 'post',
    path: '/api/sites',
    summary: 'Store one or many sites by code, all or none, each with its route node',
    body: batchOfSchema(siteInput),
    response: storedOf(siteView),
  },
  {
    method: 'get',
    path: '/api/sites/:code',
    summary: 'Show a site',
    params: codeParams,
    response: recordOf(siteView),
  },
  {
    method: 'delete',
    path: '/api/sites/:code',
    summary: 'Remove a site to which nothing refers',
    params: codeParams,
  },
  {
    method: 'post',
    path: '/api/sites/:code/reader-token',
    summary: "Make a site's reader token, told this once; the one before ends",
    params: codeParams,
    status: 201,
    response: dataOf(readerTokenView),
  },
];
