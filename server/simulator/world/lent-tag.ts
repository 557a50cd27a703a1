import { branchCars } from './branch-cars.js';

/** Every forty days the tag changes cars, so that 45 days of history always hold one move. */
const TERM_MS = 40 * 86_400_000;
const FIRST_MOVE = Date.UTC(2026, 0, 25);

const { from, to } = branchCars.lent;

function termOf(at: number): number {
  return Math.floor((at - FIRST_MOVE) / TERM_MS);
}

/** On which car the lent tag is at `at`, by compact identity. */
export function wearerAt(at: number): string {
  return termOf(at) % 2 === 0 ? to : from;
}

/** The last move of the lent tag before `now`: when, from which car and to which. */
export function lastMoveOf(now: number): { at: number; from: string; to: string } {
  const term = termOf(now);
  const at = FIRST_MOVE + term * TERM_MS;
  return { at, from: wearerAt(at - 1), to: wearerAt(at) };
}
