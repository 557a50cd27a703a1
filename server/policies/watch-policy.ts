import { isAdministrator, type Actor } from './actor.js';
import type { Policy } from './policy.js';

/** What the rights to a watch hang on: who set it, and whom it tells. */
export interface WatchSubject {
  personId: number;
  /** People the watch tells, by id. */
  peopleIds: number[];
}

const mine = (actor: Actor, watch: WatchSubject) =>
  isAdministrator(actor) || watch.personId === actor.personId;

/** Who set a watch may do everything with it; whom it tells may look at it. */
export const watchPolicy: Policy<WatchSubject, 'update' | 'delete'> = {
  see: (actor, watch) => mine(actor, watch) || watch.peopleIds.includes(actor.personId),
  update: mine,
  delete: mine,
};

/** Watches stand on what a person may see, so everybody with a role may set some. */
export const maySetWatches = (actor: Actor) => actor.roles.length > 0;

/** Whether a person may name this organisation in a scope: owners only their own. */
export function mayNameOwner(actor: Actor, organisationId: number): boolean {
  const isOnlyOwner = actor.roles.every((role) => role === 'owner');
  return !isOnlyOwner || organisationId === actor.organisationId;
}

/** Whether a person may name this site in a scope: clerks and dispatchers only theirs. */
export function mayNameSite(actor: Actor, siteId: number): boolean {
  if (isAdministrator(actor) || actor.roles.includes('owner')) return true;
  return actor.siteIds.includes(siteId);
}

/** Whether a person may have mail sent to this one: oneself, or of the same organisation. */
export function mayTell(
  actor: Actor,
  person: { id: number; organisationId: number | null },
): boolean {
  if (isAdministrator(actor) || person.id === actor.personId) return true;
  return actor.organisationId !== null && person.organisationId === actor.organisationId;
}
