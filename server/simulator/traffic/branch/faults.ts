import { CLOCK_AHEAD } from './branch-passes.js';
import { hourOf, roundNumberAt } from './round.js';

const HOUR = 3_600_000;

/** The link of Linnet Line is down for two hours of each round; then all comes at once. */
const linkDown = { site: 'LINNET', fromHour: 70.3, toHour: 72.3 };
/** The clock at Pipit is slow, but for an hour of every fourth round, when it is fast. */
const clock = { ...CLOCK_AHEAD, behindMs: 40_000, aheadMs: 9 * 60_000 };
/** On every other round the antennas of the quarry are dead; its wheel sensors are not. */
const dead = { site: 'ROWAN', fromHour: 48, toHour: 60 };

/** How long the branch's link keeps back what was read at `at`, in milliseconds. */
export function keptBackMs(site: string, at: number): number {
  const { fromHour, toHour } = linkDown;
  const hour = hourOf(at);
  if (site !== linkDown.site || hour < fromHour || hour >= toHour) return 0;
  // What was read first is sent first.
  return Math.round((toHour - hour) * HOUR * 0.999);
}

/** How far the clock of a site of the branch is off at `at`, in milliseconds. */
export function clockOffMs(site: string, at: number): number {
  if (site !== clock.site) return 0;
  return isClockAhead(site, at) ? clock.aheadMs : -clock.behindMs;
}

/** Whether what is read there and then carries a time that the door does not believe. */
export function isClockAhead(site: string, at: number): boolean {
  const hour = hourOf(at);
  const isRound = roundNumberAt(at) % clock.everyRounds === clock.round;
  return site === clock.site && isRound && hour >= clock.fromHour && hour < clock.toHour;
}

/** Whether the antennas of a site of the branch hear nothing at `at`. */
export function areDeaf(site: string, at: number): boolean {
  const hour = hourOf(at);
  const isRound = Math.abs(roundNumberAt(at)) % 2 === 1;
  return site === dead.site && isRound && hour >= dead.fromHour && hour < dead.toHour;
}
