import type { EquipmentKind } from '../identifiers/equipment-groups.js';
import type { Network } from './configuration.js';
import type { Companions } from './companions.js';
import { noRows, type FoldRows, type FoldState } from './fold-state.js';
import { foldFact, openRows } from './fold-unit.js';
import type { Fact } from './sighting.js';
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

/** Folds a unit's facts (in order of first reads) onto `start`. */
export function foldHistory(
  network: Network,
  { kind, registered }: FoldedUnit,
  start: FoldState,
  facts: readonly Fact[],
  companions: Companions,
): UnitHistory {
  const rows = noRows();
  const checkpoints: Checkpoint[] = [];
  const context = { network, companions, countsMiles: !RIDERS.has(kind) };
  let state = start;
  facts.forEach((fact, index) => {
    const before = state;
    const step = foldFact(context, before, fact);
    state = step.state;
    rows.stays.push(...step.done.stays);
    rows.legs.push(...step.done.legs);
    rows.doubts.push(...step.done.doubts);
    const opening = state.stay?.firstSeenAt !== before.stay?.firstSeenAt;
    const last = index === facts.length - 1;
    const tied = facts[index - 1]?.firstAt === fact.firstAt;
    if ((opening || last) && !tied) {
      checkpoints.push({ beforeAt: fact.firstAt, state: before, opening });
    }
  });
  const open = openRows(state);
  return {
    stays: [...rows.stays, ...open.stays],
    legs: [...rows.legs, ...open.legs],
    doubts: [...rows.doubts, ...open.doubts],
    lastSeen: lastSeenOf(network, { kind, registered }, state),
    checkpoints,
  };
}
