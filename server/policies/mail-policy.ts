import { isAdministrator, type Actor } from './actor.js';

/** Mail that went out names people and their cars: for the administrator alone. */
export const maySeeMail = (actor: Actor) => isAdministrator(actor);
