import { Router } from 'express';
import { recordOf, registeredView, storedOf } from '../contract/administration-answers.js';
import {
  batchOfSchema,
  putTagInput,
  registerInput,
  registerListQuery,
  renumberInput,
  unitParams,
} from '../contract/administration.js';
import { dataOf, pageOf } from '../contract/common.js';
import type { Context } from '../lib/context.js';
import { withTransaction } from '../lib/database.js';
import type { Operation } from '../lib/openapi/operation.js';
import { administrationBody } from '../middleware/administration-body.js';
import { requireAdministrator } from '../middleware/require-role.js';
import { actorOf, requireUser } from '../middleware/require-user.js';
import { batchOf, validateBatch } from '../middleware/validate-batch.js';
import { validate, validated } from '../middleware/validate.js';
import { administrationPolicy, changes } from '../policies/administration-policy.js';
import { authorize, permissions } from '../policies/policy.js';
import { presentRegistered } from '../presenters/administration.js';
import { refreshVisibleUnits } from '../projections/refresh-visible-units.js';
import { findRegistered, listRegister } from '../queries/list-register.js';
import { putTag } from '../services/put-tag.js';
import { renumberUnit } from '../services/renumber-unit.js';
import { takeOffRegister } from '../services/take-off-register.js';
import { upsertRegister } from '../services/upsert-register.js';

const list = { query: registerListQuery };
const one = { params: unitParams };
const renumber = { params: unitParams, body: renumberInput };
const tag = { params: unitParams, body: putTagInput };
const UNITS_AT_ONCE = 1_000;

/** The register of cars, boxes and locomotives, for administrators. */
export function registerRoutes(context: Context): Router {
  const { db, clock } = context;
  const router = Router();
  const signedIn = requireUser(context);

  router.get(
    '/register',
    signedIn,
    requireAdministrator,
    validate(list),
    async (request, response) => {
      const { rows, next } = await listRegister(db, validated(request, list).query);
      response.json({ data: rows.map(presentRegistered), next });
    },
  );

  router.post(
    '/register',
    signedIn,
    requireAdministrator,
    administrationBody,
    validateBatch(registerInput),
    async (request, response) => {
      const batch = batchOf(request, registerInput);
      const { compacts, unitIds } = await upsertRegister(
        db,
        batch,
        clock.now(),
        actorOf(request).personId,
      );
      await showChanged(context, unitIds);
      const data = (await findRegistered(db, compacts)).map(presentRegistered);
      response.json({ data: batch.isList ? data : data[0] });
    },
  );

  router.get('/register/:unitId', signedIn, validate(one), async (request, response) => {
    const [registered] = await findRegistered(db, [validated(request, one).params.unitId]);
    authorize(actorOf(request), administrationPolicy, 'see', registered);
    const can = permissions(actorOf(request), administrationPolicy, changes, registered);
    response.json({ data: presentRegistered(registered), can });
  });

  router.delete('/register/:unitId', signedIn, validate(one), async (request, response) => {
    const [registered] = await findRegistered(db, [validated(request, one).params.unitId]);
    authorize(actorOf(request), administrationPolicy, 'delete', registered);
    await takeOffRegister(db, registered.unit.id, actorOf(request).personId);
    await showChanged(context, [registered.unit.id]);
    response.status(204).end();
  });

  router.post(
    '/register/:unitId/renumber',
    signedIn,
    administrationBody,
    validate(renumber),
    async (request, response) => {
      const { params, body } = validated(request, renumber);
      const [registered] = await findRegistered(db, [params.unitId]);
      authorize(actorOf(request), administrationPolicy, 'update', registered);
      const { personId } = actorOf(request);
      const { compact } = await renumberUnit(db, registered.unit.id, body, clock.now(), personId);
      await showChanged(context, [registered.unit.id]);
      const [renumbered] = await findRegistered(db, [compact]);
      response.json({ data: renumbered && presentRegistered(renumbered) });
    },
  );

  router.post(
    '/register/:unitId/tags',
    signedIn,
    administrationBody,
    validate(tag),
    async (request, response) => {
      const { params, body } = validated(request, tag);
      const [registered] = await findRegistered(db, [params.unitId]);
      authorize(actorOf(request), administrationPolicy, 'update', registered);
      const { personId } = actorOf(request);
      const { takenFrom } = await putTag(db, registered.unit.id, body, clock.now(), personId);
      const touched = [registered.unit.id, takenFrom].filter((unitId) => unitId !== null);
      await showChanged(context, touched);
      const [worn] = await findRegistered(db, [params.unitId]);
      response.json({ data: worn && presentRegistered(worn) });
    },
  );

  return router;
}

/** Who may see these units has changed: says so to the fleets and to open clients. */
async function showChanged({ db, liveEvents }: Context, unitIds: number[]): Promise<void> {
  for (let start = 0; start < unitIds.length; start += UNITS_AT_ONCE) {
    const some = unitIds.slice(start, start + UNITS_AT_ONCE);
    await withTransaction(db.pool, (connection) => refreshVisibleUnits(connection, some));
  }
  liveEvents.publish({ unitIds });
}

export const registerOperations: Operation[] = [
  {
    method: 'get',
    path: '/api/register',
    summary: 'List the register',
    query: registerListQuery,
    response: pageOf(registeredView),
  },
  {
    method: 'post',
    path: '/api/register',
    summary: 'Store one or many units by mark and number, all or none',
    body: batchOfSchema(registerInput),
    response: storedOf(registeredView),
  },
  {
    method: 'get',
    path: '/api/register/:unitId',
    summary: 'Show what the register says of a unit',
    params: unitParams,
    response: recordOf(registeredView),
  },
  {
    method: 'delete',
    path: '/api/register/:unitId',
    summary: 'Take a unit off the register; what was read of it stays',
    params: unitParams,
  },
  {
    method: 'post',
    path: '/api/register/:unitId/renumber',
    summary: 'Give a unit another mark and number from an instant on; the one before ends there',
    params: unitParams,
    body: renumberInput,
    response: dataOf(registeredView),
  },
  {
    method: 'post',
    path: '/api/register/:unitId/tags',
    summary: 'Put a tag on a unit from an instant on, or move it there from another',
    params: unitParams,
    body: putTagInput,
    response: dataOf(registeredView),
  },
];
