import type { Request, RequestHandler, Response } from 'express';
import type { z } from 'zod';
import type { unitParams } from '../contract/equipment.js';
import type { movementsQuery, readsQuery, sightingsQuery } from '../contract/movements.js';
import type { Context } from '../lib/context.js';
import { actorOf } from '../middleware/require-user.js';
import { validated } from '../middleware/validate.js';
import { authorize, permissions } from '../policies/policy.js';
import { unitPolicy } from '../policies/unit-policy.js';
import { presentEquipmentDetail } from '../presenters/equipment-detail.js';
import { presentLeg, presentStay } from '../presenters/movements.js';
import { presentRead, presentSighting, type Sides } from '../presenters/sighting.js';
import { findOpenableUnits, type UnitAccess } from '../queries/find-openable-units.js';
import { findUnits } from '../queries/find-units.js';
import { listLegs, sumRailMetres } from '../queries/list-legs.js';
import { listReads } from '../queries/list-reads.js';
import { listSightings } from '../queries/list-sightings.js';
import { listStays } from '../queries/list-stays.js';
import { loadAntennaSides } from '../queries/load-antennas.js';
import { loadTags, tagSideOf } from '../queries/load-tags.js';
import { loadUnit } from '../queries/load-unit.js';
import { throughOf } from '../queries/through-of.js';
import { countReads, unpackEvidence } from '../domain/movements/pack-evidence.js';
import { notFound } from '../errors.js';

interface UnitSchemas {
  unit: { params: typeof unitParams };
  movements: { params: typeof unitParams; query: typeof movementsQuery };
  sightings: { params: typeof unitParams; query: typeof sightingsQuery };
  reads: { params: typeof unitParams; query: typeof readsQuery };
}

interface OpenUnit {
  unitId: number;
  access: UnitAccess;
  siteIds: number[] | null;
}

/** Handlers of /equipment/:unitId and below; each answers only what the person may see. */
export function unitHandlers(context: Context, schemas: UnitSchemas) {
  const { db, clock } = context;

  const unit: RequestHandler = async (request, response) => {
    const now = clock.now();
    const open = await openUnit(context, request, response);
    if (!open) return;
    const [equipment, tags] = await Promise.all([
      loadUnit(db, open.unitId, open.access, now),
      loadTags(db, open.unitId),
    ]);
    if (!equipment) throw notFound();
    const sitesOnly = open.siteIds !== null;
    response.json({
      data: presentEquipmentDetail({ ...equipment, tags, sitesOnly }, now),
      can: permissions(actorOf(request), unitPolicy, ['watch'], { access: open.access }),
    });
  };

  const movements: RequestHandler = async (request, response) => {
    const open = await openUnit(context, request, response);
    if (!open) return;
    const { query } = validated(request, schemas.movements);
    const now = clock.now();
    const stays = await listStays(db, open, query);
    const [legs, railMetres, through] = await Promise.all([
      listLegs(db, open, query, stays.rows),
      sumRailMetres(db, open, query),
      throughOf(db, open.unitId, stays.rows),
    ]);
    const isThrough = ({ arrived_at: at }: { arrived_at: Date | null }) =>
      (at && through.get(at.getTime())) ?? null;
    const data = {
      stays: stays.rows.map((row) => presentStay(row, now, isThrough(row))),
      legs: legs.map(presentLeg),
      railMetres,
    };
    response.json({ data, next: stays.next });
  };

  const sightings: RequestHandler = async (request, response) => {
    const open = await openUnit(context, request, response);
    if (!open) return;
    const { query } = validated(request, schemas.sightings);
    const { sightings: passes, next } = await listSightings(db, open, query);
    const sides = await sidesFor(context, open.unitId, passes.flat());
    const data = passes.flatMap(([first, ...others]) => {
      if (!first) return [];
      const runs = [first, ...others].flatMap((passage) =>
        countReads(unpackEvidence(passage.evidence)),
      );
      return [presentSighting([first, ...others], runs, sides)];
    });
    response.json({ data, next });
  };

  const reads: RequestHandler = async (request, response) => {
    const open = await openUnit(context, request, response);
    if (!open) return;
    const { query } = validated(request, schemas.reads);
    const { rows, next } = await listReads(db, open, query);
    const sides = await sidesFor(
      context,
      open.unitId,
      rows.map((row) => row.passage),
    );
    response.json({ data: rows.map((row) => presentRead(row, sides)), next });
  };

  return { unit, movements, sightings, reads };
}

/**
 * The unit of the address, for a person who may open it: 404 otherwise. Null when the answer went
 * out: another form, or a former identity, is shown the way to the present one.
 */
export async function openUnit(
  context: Context,
  request: Request,
  response: Response,
): Promise<OpenUnit | null> {
  const { db, clock } = context;
  const text = (request.params as z.infer<typeof unitParams>).unitId;
  const holders = await findUnits(db, text, clock.now());
  const unitIds = holders.map((holder) => holder.unitId);
  const openable = await findOpenableUnits(db, actorOf(request), unitIds);
  const found = holders.find((holder) => openable.has(holder.unitId));
  const access = found && openable.get(found.unitId);
  if (!found || !access) throw notFound();
  authorize(actorOf(request), unitPolicy, 'see', { access });
  if (found.compact === text) return { unitId: found.unitId, access, siteIds: access.siteIds };
  response.redirect(308, presentAddress(request, found.compact));
  return null;
}

/** The same address, with the identity that the unit goes by now. */
function presentAddress(request: Request, compact: string): string {
  const [path = '', ...query] = request.originalUrl.split('?');
  const parts = path.split('/');
  const place = parts.indexOf('equipment') + 1;
  const moved = parts.map((part, index) => (index === place ? compact : part)).join('/');
  return query.length > 0 ? `${moved}?${query.join('?')}` : moved;
}

async function sidesFor(
  context: Context,
  unitId: number,
  passages: readonly { site_id: number }[],
): Promise<Sides> {
  const [ofAntenna, tags] = await Promise.all([
    loadAntennaSides(
      context.db,
      passages.map((passage) => passage.site_id),
    ),
    loadTags(context.db, unitId),
  ]);
  return { ofAntenna, ofTag: (rawTag) => tagSideOf(tags, rawTag) };
}
