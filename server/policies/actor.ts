import { roles, type Role } from '../contract/common.js';

export type { Role };

/** The signed-in person on whose behalf a request acts. */
export interface Actor {
  personId: number;
  name: string;
  email: string;
  roles: Role[];
  organisationId: number | null;
  /** Sites a clerk or dispatcher works at. */
  siteIds: number[];
  timeZone: string;
}

export const isAdministrator = (actor: Actor) => actor.roles.includes('administrator');

/** True for the roles whose sight goes by site. */
export const worksAtSites = (actor: Actor) =>
  actor.roles.includes('clerk') || actor.roles.includes('dispatcher');

/** Roles as a person's row keeps them: names with commas between. */
export function rolesOf(stored: string): Role[] {
  const names = stored.split(',');
  return roles.filter((role) => names.includes(role));
}
