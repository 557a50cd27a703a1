import type { Site } from '../models/site.js';
import type { ReadPoint } from '../models/read-point.js';
import { isAdministrator, worksAtSites, type Actor } from './actor.js';
import type { Policy } from './policy.js';

type Change = 'update' | 'delete';

/** Organisations, people, antennas, routes, register: administrators only. */
export const administrationPolicy: Policy<object, Change> = {
  see: isAdministrator,
  update: isAdministrator,
  delete: isAdministrator,
};

/** Everybody may know that a site exists and its name; more is `details`. */
export const sitePolicy: Policy<
  Pick<Site, 'id'>,
  Change | 'details' | 'heartbeat' | 'replaceToken' | 'reportByEye'
> = {
  see: () => true,
  details: (actor, site) => isAdministrator(actor) || isOwnSite(actor, site.id),
  update: isAdministrator,
  delete: isAdministrator,
  heartbeat: isAdministrator,
  replaceToken: isAdministrator,
  reportByEye: (actor, site) => {
    const siteIds = eyeSitesOf(actor);
    return siteIds === null || siteIds.includes(site.id);
  },
};

/** Sites where the person may say what they saw with their own eyes; null: all. */
export function eyeSitesOf(actor: Actor): number[] | null {
  if (isAdministrator(actor)) return null;
  return actor.roles.includes('clerk') ? actor.siteIds : [];
}

/** Read points are seen by those who work at their site. */
export const readPointPolicy: Policy<Pick<ReadPoint, 'siteId'>, Change> = {
  see: (actor, readPoint) => isAdministrator(actor) || isOwnSite(actor, readPoint.siteId),
  update: isAdministrator,
  delete: isAdministrator,
};

function isOwnSite(actor: Actor, siteId: number): boolean {
  return worksAtSites(actor) && actor.siteIds.includes(siteId);
}

/** What can be done to a record of administration, in the order in which `can` lists it. */
export const changes = ['update', 'delete'] as const;
