import { Router } from 'express';
import { passAnswer, passParams } from '../contract/passes.js';
import type { Context } from '../lib/context.js';
import type { Operation } from '../lib/openapi/operation.js';
import { notFound } from '../errors.js';
import { actorOf, requireUser } from '../middleware/require-user.js';
import { validate, validated } from '../middleware/validate.js';
import { passPolicy } from '../policies/pass-policy.js';
import { authorize } from '../policies/policy.js';
import { passIdOf } from '../presenters/pass-id.js';
import { presentPass } from '../presenters/pass.js';
import { findPass, findSuccessor, listPassUnits, namedUnits } from '../queries/find-pass.js';
import { unitNames } from '../queries/unit-names.js';

const one = { params: passParams };

/** Trains and cuts that went by a read point. */
export function passesRoutes(context: Context): Router {
  const { db, clock } = context;
  const router = Router();

  router.get('/passes/:passId', requireUser(context), validate(one), async (request, response) => {
    const { passId } = validated(request, one).params;
    const actor = actorOf(request);
    const present = await findPass(db, passId);
    const successor = present ? null : await findSuccessor(db, passId);
    const pass = present ?? (successor && (await findPass(db, passIdOf(successor))));
    if (!pass) throw notFound();
    const units = await listPassUnits(db, pass);
    const unitIds = units.map((unit) => unit.unit_id);
    const named = await namedUnits(db, actor, pass, unitIds);
    authorize(actor, passPolicy, 'see', { named: named && named.size });
    if (successor) return response.redirect(308, `/api/passes/${passIdOf(successor)}`);
    const names = await unitNames(db, named ? [...named] : unitIds, clock.now());
    return response.json({ data: presentPass(pass, units, names) });
  });

  return router;
}

export const passesOperations: Operation[] = [
  {
    method: 'get',
    path: '/api/passes/:passId',
    summary: 'Tell what went by a read point in one pass; former ids redirect',
    params: passParams,
    response: passAnswer,
  },
];
