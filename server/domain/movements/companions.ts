import type { PassKey } from './passes.js';

/** What the other units of a unit's passes tell of it. */
export interface Companions {
  /**
   * Of the others in a pass: how many there are, and when those that were read leaving the site
   * just before did so (ms, in any order).
   */
  leftFrom(pass: PassKey, siteId: number): { others: number; departures: readonly number[] };
  /** How many others were in both passes. */
  shared(one: PassKey, other: PassKey): number;
}

/** A unit that was always alone. */
export const nobody: Companions = {
  leftFrom: () => ({ others: 0, departures: [] }),
  shared: () => 0,
};

/** When they left, where at least half of them were read leaving: the lower median; else null. */
export function sharedDeparture(
  companions: Companions,
  pass: PassKey,
  siteId: number,
): number | null {
  const { others, departures } = companions.leftFrom(pass, siteId);
  if (departures.length === 0 || departures.length * 2 < others) return null;
  const sorted = [...departures].sort((a, b) => a - b);
  return sorted[(sorted.length - 1) >> 1] ?? null;
}
