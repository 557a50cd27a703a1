/** A sighting in doubt; `at` in ms. */
export interface DoubtedSighting {
  siteId: number;
  unitId: number;
  at: number;
}

const DAY_MS = 86_400_000;
const FEWEST_UNITS = 5;

/**
 * Of sightings in doubt those that a wrong clock of their site would explain: five units or more
 * within a day. What is left is a matter of one unit's tags.
 */
export function underWrongClocks<T extends DoubtedSighting>(doubts: readonly T[]): Set<T> {
  const found = new Set<T>();
  const bySite = new Map<number, T[]>();
  for (const doubt of [...doubts].sort((a, b) => a.at - b.at)) {
    const known = bySite.get(doubt.siteId);
    if (known) known.push(doubt);
    else bySite.set(doubt.siteId, [doubt]);
  }
  for (const own of bySite.values()) markCrowded(own, found);
  return found;
}

/** Slides a day over the doubts of one site, which come in order of time. */
function markCrowded<T extends DoubtedSighting>(doubts: readonly T[], found: Set<T>): void {
  const within = new Map<number, number>();
  let first = 0;
  let marked = 0;
  doubts.forEach((doubt, last) => {
    within.set(doubt.unitId, (within.get(doubt.unitId) ?? 0) + 1);
    for (; doubt.at - (doubts[first] as T).at > DAY_MS; first += 1) {
      const { unitId } = doubts[first] as T;
      const left = (within.get(unitId) ?? 0) - 1;
      if (left > 0) within.set(unitId, left);
      else within.delete(unitId);
    }
    if (within.size < FEWEST_UNITS) return;
    for (const one of doubts.slice(Math.max(first, marked), last + 1)) found.add(one);
    marked = last + 1;
  });
}
