import type { RequestHandler } from 'express';
import { MOST_ROWS } from '../contract/common.js';
import type { unitParams } from '../contract/equipment.js';
import type { unitReportsQuery } from '../contract/unit-reports.js';
import type { Context } from '../lib/context.js';
import { actorOf } from '../middleware/require-user.js';
import { validated } from '../middleware/validate.js';
import { isAdministrator, type Actor } from '../policies/actor.js';
import { eyeSitesOf, sitePolicy } from '../policies/administration-policy.js';
import { presentSite } from '../presenters/administration.js';
import { presentUnitReport, type ReportSight } from '../presenters/unit-report.js';
import { listSiteNames } from '../queries/list-sites.js';
import { listUnitReports } from '../queries/list-unit-reports.js';
import { openUnit } from './unit-handlers.js';

/** Handler of /equipment/:unitId/reports: what was reported of a unit at sites the person sees. */
export function unitReportsHandler(
  context: Context,
  schemas: { params: typeof unitParams; query: typeof unitReportsQuery },
): RequestHandler {
  const { db } = context;
  return async (request, response) => {
    const open = await openUnit(context, request, response);
    if (!open) return;
    const actor = actorOf(request);
    const siteIds = eyeSitesOf(actor);
    const [{ rows, next }, sites] = await Promise.all([
      listUnitReports(db, open, validated(request, schemas).query),
      siteIds?.length === 0 ? [] : listSiteNames(db, siteIds, MOST_ROWS),
    ]);
    const sight = sightOf(actor);
    response.json({
      data: rows.map((row) => presentUnitReport(row, sight)),
      next,
      can: { reportAt: sites.map((site) => presentSite(site, false)) },
    });
  };
}

function sightOf(actor: Actor): ReportSight {
  return {
    seesSource: (id) => isAdministrator(actor) || actor.organisationId === id,
    seesNames: (id) => sitePolicy.details(actor, { id }),
    mayRetract: (id) => sitePolicy.reportByEye(actor, { id }),
  };
}
