import { Router } from 'express';
import { fleetSummaryAnswer } from '../contract/fleet.js';
import type { Context } from '../lib/context.js';
import type { Operation } from '../lib/openapi/operation.js';
import { actorOf, requireUser } from '../middleware/require-user.js';
import { validate } from '../middleware/validate.js';
import { presentFleetSummary } from '../presenters/fleet-summary.js';
import { countFleet, findOldestPastLimit, kindsHeld } from '../queries/get-fleet-summary.js';
import { loadIdentities } from '../queries/load-equipment.js';
import { unitSourcesOf } from '../queries/narrow-units.js';

/** The figures of the opening sentence, over what the person may see. */
export function fleetRoutes(context: Context, projectorLagMs: () => Promise<number>): Router {
  const { db, clock } = context;
  const router = Router();

  router.get('/fleet/summary', requireUser(context), validate({}), async (request, response) => {
    const now = clock.now();
    const sources = unitSourcesOf(actorOf(request));
    const [counts, holds, oldest, lag] = await Promise.all([
      countFleet(db, sources, now),
      kindsHeld(db, sources),
      findOldestPastLimit(db, sources, now),
      projectorLagMs(),
    ]);
    const identities = await loadIdentities(db, oldest ? [oldest.unit_id] : [], now);
    const identity = oldest && identities.get(oldest.unit_id)?.[0];
    const named = oldest && identity ? { ...oldest, identity } : null;
    const data = presentFleetSummary({ ...counts, holds }, named, { now, projectorLagMs: lag });
    response.json({ data });
  });

  return router;
}

export const fleetOperations: Operation[] = [
  {
    method: 'get',
    path: '/api/fleet/summary',
    summary: 'Count what I may see: on hand, en route, quiet, past its limit',
    response: fleetSummaryAnswer,
  },
];
