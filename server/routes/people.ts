import { Router } from 'express';
import { personView, recordOf, storedOf } from '../contract/administration-answers.js';
import { batchOfSchema, idParams, MOST_PEOPLE, personInput } from '../contract/administration.js';
import { pageOf, pageQuery } from '../contract/common.js';
import type { Context } from '../lib/context.js';
import type { Operation } from '../lib/openapi/operation.js';
import { administrationBody } from '../middleware/administration-body.js';
import { requireAdministrator } from '../middleware/require-role.js';
import { actorOf, requireUser } from '../middleware/require-user.js';
import { batchOf, validateBatch } from '../middleware/validate-batch.js';
import { validate, validated } from '../middleware/validate.js';
import { administrationPolicy, changes } from '../policies/administration-policy.js';
import { authorize, permissions } from '../policies/policy.js';
import { presentPerson } from '../presenters/administration.js';
import { findPeople, findPerson, listPeople } from '../queries/list-people.js';
import { removePerson } from '../services/remove-person.js';
import { upsertPeople } from '../services/upsert-people.js';

const list = { query: pageQuery };
const one = { params: idParams };

/** People, their roles and places, for administrators. */
export function peopleRoutes(context: Context): Router {
  const { db } = context;
  const router = Router();
  const signedIn = requireUser(context);

  router.get(
    '/people',
    signedIn,
    requireAdministrator,
    validate(list),
    async (request, response) => {
      const { rows, next } = await listPeople(db, validated(request, list).query);
      response.json({ data: rows.map(presentPerson), next });
    },
  );

  router.post(
    '/people',
    signedIn,
    requireAdministrator,
    administrationBody,
    validateBatch(personInput, MOST_PEOPLE),
    async (request, response) => {
      const batch = batchOf(request, personInput);
      await upsertPeople(context, batch);
      const emails = batch.items.map((item) => item.email);
      const data = (await findPeople(db, emails)).map(presentPerson);
      response.json({ data: batch.isList ? data : data[0] });
    },
  );

  router.get('/people/:id', signedIn, validate(one), async (request, response) => {
    const person = await findPerson(db, validated(request, one).params.id);
    authorize(actorOf(request), administrationPolicy, 'see', person);
    const can = permissions(actorOf(request), administrationPolicy, changes, person);
    response.json({ data: presentPerson(person), can });
  });

  router.delete('/people/:id', signedIn, validate(one), async (request, response) => {
    const person = await findPerson(db, validated(request, one).params.id);
    authorize(actorOf(request), administrationPolicy, 'delete', person);
    await removePerson(db, person.id);
    response.status(204).end();
  });

  return router;
}

export const peopleOperations: Operation[] = [
  {
    method: 'get',
    path: '/api/people',
    summary: 'List people',
    query: pageQuery,
    response: pageOf(personView),
  },
  {
    method: 'post',
    path: '/api/people',
    summary: 'Store one or many people by mail address, all or none; a password ends sessions',
    body: batchOfSchema(personInput, MOST_PEOPLE),
    response: storedOf(personView),
  },
  {
    method: 'get',
    path: '/api/people/:id',
    summary: 'Show a person',
    params: idParams,
    response: recordOf(personView),
  },
  {
    method: 'delete',
    path: '/api/people/:id',
    summary: 'Remove a person without watches, never the last administrator',
    params: idParams,
  },
];
