import { Router } from 'express';
import {
  reportTokenView,
  organisationView,
  recordOf,
  storedOf,
} from '../contract/administration-answers.js';
import { batchOfSchema, codeParams, organisationInput } from '../contract/administration.js';
import { dataOf, pageOf, pageQuery } from '../contract/common.js';
import type { Context } from '../lib/context.js';
import type { Operation } from '../lib/openapi/operation.js';
import { administrationBody } from '../middleware/administration-body.js';
import { requireAdministrator } from '../middleware/require-role.js';
import { actorOf, requireUser } from '../middleware/require-user.js';
import { batchOf, validateBatch } from '../middleware/validate-batch.js';
import { validate, validated } from '../middleware/validate.js';
import { administrationPolicy, changes } from '../policies/administration-policy.js';
import { authorize, permissions } from '../policies/policy.js';
import { presentOrganisation } from '../presenters/administration.js';
import { findOrganisations, listOrganisations } from '../queries/list-organisations.js';
import { removeOrganisation } from '../services/remove-organisation.js';
import { replaceReportToken } from '../services/replace-report-token.js';
import { upsertOrganisations } from '../services/upsert-organisations.js';

const list = { query: pageQuery };
const one = { params: codeParams };

/** Organisations, for administrators. */
export function organisationsRoutes(context: Context): Router {
  const { db } = context;
  const router = Router();
  const signedIn = requireUser(context);

  router.get(
    '/organisations',
    signedIn,
    requireAdministrator,
    validate(list),
    async (request, response) => {
      const { rows, next } = await listOrganisations(db, validated(request, list).query);
      response.json({ data: rows.map(presentOrganisation), next });
    },
  );

  router.post(
    '/organisations',
    signedIn,
    requireAdministrator,
    administrationBody,
    validateBatch(organisationInput),
    async (request, response) => {
      const batch = batchOf(request, organisationInput);
      await upsertOrganisations(db, batch);
      const codes = batch.items.map((item) => item.code);
      const data = (await findOrganisations(db, codes)).map(presentOrganisation);
      response.json({ data: batch.isList ? data : data[0] });
    },
  );

  router.get('/organisations/:code', signedIn, validate(one), async (request, response) => {
    const [organisation] = await findOrganisations(db, [validated(request, one).params.code]);
    authorize(actorOf(request), administrationPolicy, 'see', organisation);
    const can = permissions(actorOf(request), administrationPolicy, changes, organisation);
    response.json({ data: presentOrganisation(organisation), can });
  });

  router.delete('/organisations/:code', signedIn, validate(one), async (request, response) => {
    const [organisation] = await findOrganisations(db, [validated(request, one).params.code]);
    authorize(actorOf(request), administrationPolicy, 'delete', organisation);
    await removeOrganisation(db, organisation.id);
    response.status(204).end();
  });

  router.post(
    '/organisations/:code/report-token',
    signedIn,
    requireAdministrator,
    validate(one),
    async (request, response) => {
      const [organisation] = await findOrganisations(db, [validated(request, one).params.code]);
      authorize(actorOf(request), administrationPolicy, 'update', organisation);
      const token = await replaceReportToken(context, organisation.id);
      response.status(201).json({ data: { token } });
    },
  );

  return router;
}

export const organisationsOperations: Operation[] = [
  {
    method: 'get',
    path: '/api/organisations',
    summary: 'List organisations by code',
    query: pageQuery,
    response: pageOf(organisationView),
  },
  {
    method: 'post',
    path: '/api/organisations',
    summary: 'Store one or many organisations by code, all or none',
    body: batchOfSchema(organisationInput),
    response: storedOf(organisationView),
  },
  {
    method: 'get',
    path: '/api/organisations/:code',
    summary: 'Show an organisation',
    params: codeParams,
    response: recordOf(organisationView),
  },
  {
    method: 'delete',
    path: '/api/organisations/:code',
    summary: 'Remove an organisation to which nothing belongs',
    params: codeParams,
  },
  {
    method: 'post',
    path: '/api/organisations/:code/report-token',
    summary: "Make an organisation's token to report with, told this once; the one before ends",
    params: codeParams,
    status: 201,
    response: dataOf(reportTokenView),
  },
];
