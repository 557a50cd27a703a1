import type { EquipmentKind } from '../identifiers/equipment-groups.js';
import type { Network } from './configuration.js';
import type { FoldRows, FoldState } from './fold-state.js';
import { foldSighting, openRows, type Sighting } from './fold-unit.js';
import { lastSeenOf, type FoldedUnit, type LastSeen } from './last-seen.js';

/** A state of the fold to start again from: everything before `beforeAt` (ms) is in it. */
export interface Checkpoint {
  beforeAt: number;
  state: FoldState;
  /** Kept for late reads: a stay begins with the next sighting. */
  opening: boolean;
}

/** What a unit's sightings lead to. */
export interface UnitHistory extends FoldRows {
  lastSeen: LastSeen | null;
  /** Where a later fold can start: before each new stay, and before the last sighting. */
  checkpoints: Checkpoint[];
}

const RIDERS: ReadonlySet<EquipmentKind> = new Set([
  'container',
  'trailer',
  'chassis',
  'generatorSet',
]);

/** Folds a unit's sightings (in order of first reads) onto `start`. */
export function foldHistory(
  network: Network,
  { kind, registered }: FoldedUnit,
  start: FoldState,
  sightings: readonly Sighting[],
): UnitHistory {
  const stays: FoldRows['stays'] = [];
  const legs: FoldRows['legs'] = [];
  const checkpoints: Checkpoint[] = [];
  let state = start;
  sightings.forEach((sighting, index) => {
    const before = state;
    const step = foldSighting(network, before, sighting, !RIDERS.has(kind));
    state = step.state;
    stays.push(...step.done.stays);
    legs.push(...step.done.legs);
    const opening = state.stay?.firstSeenAt !== before.stay?.firstSeenAt;
    const last = index === sightings.length - 1;
    const tied = sightings[index - 1]?.firstAt === sighting.firstAt;
    if ((opening || last) && !tied) {
      checkpoints.push({ beforeAt: sighting.firstAt, state: before, opening });
    }
  });
  const open = openRows(state);
  const lastSighting = sightings.at(-1);
  return {
    stays: [...stays, ...open.stays],
    legs: [...legs, ...open.legs],
    lastSeen: lastSighting ? lastSeenOf(network, { kind, registered }, state, lastSighting) : null,
    checkpoints,
  };
}
