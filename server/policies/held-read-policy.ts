import { isAdministrator, type Actor } from './actor.js';

/** Reads that are set aside belong to no car yet, so nobody else could be shown their own. */
export const maySeeHeldReads = (actor: Actor) => isAdministrator(actor);

/** A release writes history and stands for good. */
export const mayReleaseReads = (actor: Actor) => isAdministrator(actor);
