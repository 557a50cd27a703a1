import { Router } from 'express';
import { demoCasesAnswer, type DemoCase, type DemoCasesAnswer } from '../contract/demo-cases.js';
import type { Context } from '../lib/context.js';
import type { Operation } from '../lib/openapi/operation.js';
import { onlyInDemo } from '../middleware/only-in-demo.js';
import { actorOf, requireUser } from '../middleware/require-user.js';
import { validate } from '../middleware/validate.js';
import { findOpenableUnits } from '../queries/find-openable-units.js';
import { unitIdsByCompact } from '../queries/unit-ids-by-compact.js';

/** Which cases the demo shows, and where; outside the demo it does not exist. */
export function demoCasesRoutes(context: Context, cases: readonly DemoCase[]): Router {
  const { db } = context;
  const router = Router();
  const guards = [onlyInDemo(context), requireUser(context), validate({})];
  router.get('/demo/cases', ...guards, async (request, response) => {
    const named = cases.flatMap(({ cars }) => cars.map(({ unitId }) => unitId));
    const ids = await unitIdsByCompact(db, named);
    const openable = await findOpenableUnits(db, actorOf(request), [...new Set(ids.values())]);
    const data = cases.map((each) => ({
      ...each,
      cars: each.cars.map((car) => ({ ...car, opens: openable.has(ids.get(car.unitId) ?? -1) })),
    }));
    response.json({ data } satisfies DemoCasesAnswer);
  });
  return router;
}

export const demoCasesOperations: Operation[] = [
  {
    method: 'get',
    path: '/api/demo/cases',
    summary: 'Say which cases the demo shows, and on which cars (demo only)',
    response: demoCasesAnswer,
  },
];
