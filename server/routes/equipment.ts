import { Router } from 'express';
import { equipmentListAnswer, equipmentQuery } from '../contract/equipment.js';
import type { Context } from '../lib/context.js';
import type { Operation } from '../lib/openapi/operation.js';
import { actorOf, requireUser } from '../middleware/require-user.js';
import { validate, validated } from '../middleware/validate.js';
import { presentEquipment } from '../presenters/equipment.js';
import { findReferences } from '../queries/find-references.js';
import { listUnitIds } from '../queries/list-unit-ids.js';
import { loadEquipment } from '../queries/load-equipment.js';
import { unitSourcesOf } from '../queries/narrow-units.js';

const list = { query: equipmentQuery };

/** The list of equipment; a unit and its history stand in unit.ts. */
export function equipmentRoutes(context: Context): Router {
  const { db, clock } = context;
  const router = Router();

  router.get('/equipment', requireUser(context), validate(list), async (request, response) => {
    const { site, owner, search, sort, limit, cursor, ...filters } = validated(request, list).query;
    const references = await findReferences(db, { site, owner });
    const page = await listUnitIds(db, {
      sources: unitSourcesOf(actorOf(request)),
      filters: { ...filters, ...references },
      ...{ search, sort, limit, cursor },
      now: clock.now(),
    });
    const equipment = await loadEquipment(db, page.unitIds, page.asOf);
    const data = equipment.map(({ row, identities }) =>
      presentEquipment(row, identities[0], page.asOf),
    );
    response.json({ data, next: page.next });
  });

  return router;
}

export const equipmentOperations: Operation[] = [
  {
    method: 'get',
    path: '/api/equipment',
    summary: 'List the equipment that I may see, what wants attention first',
    query: equipmentQuery,
    response: equipmentListAnswer,
  },
];
