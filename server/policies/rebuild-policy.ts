import type { RebuildState } from '../contract/rebuilds.js';
import { isAdministrator, type Actor } from './actor.js';
import type { Policy } from './policy.js';

export interface RebuildSubject {
  state: RebuildState;
}

/** Administrators alone; what is done can be neither stopped nor resumed. */
export const rebuildPolicy: Policy<RebuildSubject, 'stop' | 'resume'> = {
  see: isAdministrator,
  stop: (actor, { state }) =>
    isAdministrator(actor) && (state === 'waiting' || state === 'running'),
  resume: (actor, { state }) => isAdministrator(actor) && state === 'stopped',
};

export const maySeeRebuilds = (actor: Actor) => isAdministrator(actor);

/** What can be done to a rebuild, as `can` lists it. */
export const rebuildActs = ['stop', 'resume'] as const;
