import { Router } from 'express';
import { doubtsQuery, unitDoubtsAnswer } from '../contract/doubts.js';
import {
  equipmentDetailAnswer,
  equipmentListAnswer,
  equipmentQuery,
  unitParams,
} from '../contract/equipment.js';
import {
  movementsAnswer,
  movementsQuery,
  readsAnswer,
  readsQuery,
  sightingsAnswer,
  sightingsQuery,
} from '../contract/movements.js';
import { unitReportsAnswer, unitReportsQuery } from '../contract/unit-reports.js';
import type { Context } from '../lib/context.js';
import type { Operation } from '../lib/openapi/operation.js';
import { actorOf, requireUser } from '../middleware/require-user.js';
import { validate, validated } from '../middleware/validate.js';
import { presentEquipment } from '../presenters/equipment.js';
import { findReferences } from '../queries/find-references.js';
import { listUnitIds } from '../queries/list-unit-ids.js';
import { loadEquipment } from '../queries/load-equipment.js';
import { unitSourcesOf } from '../queries/narrow-units.js';
import { unitHandlers } from './unit-handlers.js';
import { unitDoubtsHandler } from './doubts.js';
import { unitReportsHandler } from './unit-reports.js';

const list = { query: equipmentQuery };
const unit = { params: unitParams };
const movements = { params: unitParams, query: movementsQuery };
const sightings = { params: unitParams, query: sightingsQuery };
const reads = { params: unitParams, query: readsQuery };
const doubts = { params: unitParams, query: doubtsQuery };
const reports = { params: unitParams, query: unitReportsQuery };

/** The list of equipment, one unit, and its history. */
export function equipmentRoutes(context: Context): Router {
  const { db, clock } = context;
  const router = Router();
  const handle = unitHandlers(context, { unit, movements, sightings, reads });

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

  const guard = requireUser(context);
  router.get('/equipment/:unitId', guard, validate(unit), handle.unit);
  router.get('/equipment/:unitId/movements', guard, validate(movements), handle.movements);
  router.get('/equipment/:unitId/sightings', guard, validate(sightings), handle.sightings);
  router.get('/equipment/:unitId/reads', guard, validate(reads), handle.reads);
  router.get(
    '/equipment/:unitId/reports',
    guard,
    validate(reports),
    unitReportsHandler(context, reports),
  );
  router.get(
    '/equipment/:unitId/doubts',
    guard,
    validate(doubts),
    unitDoubtsHandler(context, doubts),
  );
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
  {
    method: 'get',
    path: '/api/equipment/:unitId',
    summary: 'Tell what is known of one unit; former identities redirect',
    params: unitParams,
    response: equipmentDetailAnswer,
  },
  {
    method: 'get',
    path: '/api/equipment/:unitId/movements',
    summary: 'List the stays and legs of a unit, oldest first',
    params: unitParams,
    query: movementsQuery,
    response: movementsAnswer,
  },
  {
    method: 'get',
    path: '/api/equipment/:unitId/sightings',
    summary: 'List where readers saw a unit, a row for each pass, latest first',
    params: unitParams,
    query: sightingsQuery,
    response: sightingsAnswer,
  },
  {
    method: 'get',
    path: '/api/equipment/:unitId/reads',
    summary: 'List the raw reads that a unit is known by, latest first',
    params: unitParams,
    query: readsQuery,
    response: readsAnswer,
  },
  {
    method: 'get',
    path: '/api/equipment/:unitId/reports',
    summary: 'List what was reported of a unit by messages and by eye, latest first',
    params: unitParams,
    query: unitReportsQuery,
    response: unitReportsAnswer,
  },
  {
    method: 'get',
    path: '/api/equipment/:unitId/doubts',
    summary: 'List sightings of a unit that no train could join, the latest first',
    params: unitParams,
    query: doubtsQuery,
    response: unitDoubtsAnswer,
  },
];
