import { Router } from 'express';
import { antennaView, recordOf, storedOf } from '../contract/administration-answers.js';
import {
  antennaInput,
  antennaParams,
  batchOfSchema,
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
import { administrationPolicy, changes } from '../policies/administration-policy.js';
import { authorize, permissions } from '../policies/policy.js';
import { presentAntenna } from '../presenters/administration.js';
import { findAntennas, listAntennas } from '../queries/list-antennas.js';
import { removeAntenna } from '../services/remove-antenna.js';
import { upsertAntennas } from '../services/upsert-antennas.js';

const list = { query: siteListQuery };
const one = { params: antennaParams };

/** Antennas, for administrators. */
export function antennasRoutes(context: Context): Router {
  const { db } = context;
  const router = Router();
  const signedIn = requireUser(context);

  router.get(
    '/antennas',
    signedIn,
    requireAdministrator,
    validate(list),
    async (request, response) => {
      const { rows, next } = await listAntennas(db, validated(request, list).query);
      response.json({ data: rows.map(presentAntenna), next });
    },
  );

  router.post(
    '/antennas',
    signedIn,
    requireAdministrator,
    administrationBody,
    validateBatch(antennaInput),
    async (request, response) => {
      const batch = batchOf(request, antennaInput);
      await upsertAntennas(db, batch, actorOf(request).personId);
      const data = (await findAntennas(db, batch.items)).map(presentAntenna);
      response.json({ data: batch.isList ? data : data[0] });
    },
  );

  router.get('/antennas/:site/:number', signedIn, validate(one), async (request, response) => {
    const [antenna] = await findAntennas(db, [validated(request, one).params]);
    authorize(actorOf(request), administrationPolicy, 'see', antenna);
    const can = permissions(actorOf(request), administrationPolicy, changes, antenna);
    response.json({ data: presentAntenna(antenna), can });
  });

  router.delete('/antennas/:site/:number', signedIn, validate(one), async (request, response) => {
    const [antenna] = await findAntennas(db, [validated(request, one).params]);
    authorize(actorOf(request), administrationPolicy, 'delete', antenna);
    await removeAntenna(db, antenna, actorOf(request).personId);
    response.status(204).end();
  });

  return router;
}

export const antennasOperations: Operation[] = [
  {
    method: 'get',
    path: '/api/antennas',
    summary: 'List antennas site by site',
    query: siteListQuery,
    response: pageOf(antennaView),
  },
  {
    method: 'post',
    path: '/api/antennas',
    summary: 'Store one or many antennas by site and number, all or none',
    body: batchOfSchema(antennaInput),
    response: storedOf(antennaView),
  },
  {
    method: 'get',
    path: '/api/antennas/:site/:number',
    summary: 'Show an antenna',
    params: antennaParams,
    response: recordOf(antennaView),
  },
  {
    method: 'delete',
    path: '/api/antennas/:site/:number',
    summary: 'Remove an antenna that has read nothing yet',
    params: antennaParams,
  },
];
