import { Router } from 'express';
import { readPointView, recordOf, storedOf } from '../contract/administration-answers.js';
import {
  batchOfSchema,
  readPointInput,
  siteCodeParams,
  siteListQuery,
} from '../contract/administration.js';
import { pageOf } from '../contract/common.js';
import type { Context } from '../lib/context.js';
import type { Operation } from '../lib/openapi/operation.js';
import { administrationBody } from '../middleware/administration-body.js';
import { requireAdministrator } from '../middleware/require-role.js';
import { actorOf, requireUser } from '../middleware/require-user.js';
import { batchOf, validateBatch } from '../middleware/validate-batch.js';
import { validate, validated } from '../middleware/validate.js';
import { changes, readPointPolicy } from '../policies/administration-policy.js';
import { authorize, permissions } from '../policies/policy.js';
import { presentReadPoint } from '../presenters/administration.js';
import { findReadPoint, findReadPoints, listReadPoints } from '../queries/list-read-points.js';
import { removeReadPoint } from '../services/remove-read-point.js';
import { upsertReadPoints } from '../services/upsert-read-points.js';

const list = { query: siteListQuery };
const one = { params: siteCodeParams };

/** Read points, seen by those who work at their site. */
export function readPointsRoutes(context: Context): Router {
  const { db } = context;
  const router = Router();
  const signedIn = requireUser(context);

  router.get('/read-points', signedIn, validate(list), async (request, response) => {
    const { query } = validated(request, list);
    const { rows, codes, next } = await listReadPoints(db, actorOf(request), query);
    response.json({ data: rows.map((row) => presentReadPoint(row, codes)), next });
  });

  router.post(
    '/read-points',
    signedIn,
    requireAdministrator,
    administrationBody,
    validateBatch(readPointInput),
    async (request, response) => {
      const batch = batchOf(request, readPointInput);
      await upsertReadPoints(db, batch, actorOf(request).personId);
      const { rows, codes } = await findReadPoints(db, batch.items);
      const data = rows.map((row) => presentReadPoint(row, codes));
      response.json({ data: batch.isList ? data : data[0] });
    },
  );

  router.get('/read-points/:site/:code', signedIn, validate(one), async (request, response) => {
    const { site, code } = validated(request, one).params;
    const found = await findReadPoint(db, site, code);
    const readPoint = found?.readPoint;
    authorize(actorOf(request), readPointPolicy, 'see', readPoint);
    const can = permissions(actorOf(request), readPointPolicy, changes, readPoint);
    response.json({ data: presentReadPoint(readPoint, found?.codes ?? new Map()), can });
  });

  router.delete('/read-points/:site/:code', signedIn, validate(one), async (request, response) => {
    const { site, code } = validated(request, one).params;
    const readPoint = (await findReadPoint(db, site, code))?.readPoint;
    authorize(actorOf(request), readPointPolicy, 'delete', readPoint);
    await removeReadPoint(db, readPoint.id);
    response.status(204).end();
  });

  return router;
}

export const readPointsOperations: Operation[] = [
  {
    method: 'get',
    path: '/api/read-points',
    summary: 'List read points of the sites one works at, site by site',
    query: siteListQuery,
    response: pageOf(readPointView),
  },
  {
    method: 'post',
    path: '/api/read-points',
    summary: 'Store one or many read points by site and code, all or none',
    body: batchOfSchema(readPointInput),
    response: storedOf(readPointView),
  },
  {
    method: 'get',
    path: '/api/read-points/:site/:code',
    summary: 'Show a read point',
    params: siteCodeParams,
    response: recordOf(readPointView),
  },
  {
    method: 'delete',
    path: '/api/read-points/:site/:code',
    summary: 'Remove a read point to which nothing refers',
    params: siteCodeParams,
  },
];
