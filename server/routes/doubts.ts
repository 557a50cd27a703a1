import { Router, type RequestHandler } from 'express';
import type { pageQuery } from '../contract/common.js';
import { DOUBT_DAYS, doubtsAnswer, doubtsQuery } from '../contract/doubts.js';
import type { unitParams } from '../contract/equipment.js';
import type { Context } from '../lib/context.js';
import type { Operation } from '../lib/openapi/operation.js';
import { actorOf, requireUser } from '../middleware/require-user.js';
import { validate, validated } from '../middleware/validate.js';
import { maySeeDoubts } from '../policies/doubt-policy.js';
import { authorizeAll } from '../policies/policy.js';
import { presentDoubt } from '../presenters/doubt.js';
import {
  countOpenDoubts,
  listOpenDoubts,
  listUnitDoubts,
  type DoubtRow,
} from '../queries/list-doubts.js';
import { unitNames } from '../queries/unit-names.js';
import { openUnit } from './unit-handlers.js';

const list = { query: doubtsQuery };
const DAY_MS = 86_400_000;

/** Sightings that no train could join, of everybody's cars. */
export function doubtsRoutes(context: Context): Router {
  const { db, clock } = context;
  const router = Router();

  router.get('/doubts', requireUser(context), validate(list), async (request, response) => {
    authorizeAll(actorOf(request), maySeeDoubts);
    const since = new Date(clock.now().getTime() - DOUBT_DAYS * DAY_MS);
    const [{ rows, next }, counts] = await Promise.all([
      listOpenDoubts(db, since, validated(request, list).query),
      countOpenDoubts(db, since),
    ]);
    response.json({ data: await presentAll(context, rows), next, counts });
  });

  return router;
}

/** Handler of /equipment/:unitId/doubts: those of one unit, at sites the person sees. */
export function unitDoubtsHandler(
  context: Context,
  schemas: { params: typeof unitParams; query: typeof pageQuery },
): RequestHandler {
  return async (request, response) => {
    const open = await openUnit(context, request, response);
    if (!open) return;
    const { rows, next } = await listUnitDoubts(
      context.db,
      open,
      validated(request, schemas).query,
    );
    response.json({ data: await presentAll(context, rows), next });
  };
}

async function presentAll({ db, clock }: Context, rows: readonly DoubtRow[]) {
  const names = await unitNames(
    db,
    rows.map((row) => row.unit_id),
    clock.now(),
  );
  return rows.flatMap((row) => {
    const name = names.get(row.unit_id);
    return name ? [presentDoubt(row, name)] : [];
  });
}

export const doubtsOperations: Operation[] = [
  {
    method: 'get',
    path: '/api/doubts',
    summary: 'List sightings of the last 30 days that no train could join, the latest first',
    query: doubtsQuery,
    response: doubtsAnswer,
  },
];
