import { isAdministrator, type Actor } from './actor.js';

/** Tags and clocks are the administrator's; everybody reads of their own cars on the car's page. */
export const maySeeDoubts = (actor: Actor) => isAdministrator(actor);
