import type { History } from '../../server/domain/movements/history-of.js';
import type { Direction } from '../../server/domain/movements/configuration.js';
import type { Traffic, TrueCrossing } from './train-generator.js';
import type { TwoYards } from './two-yards.js';

/** How many of what happened history has right, and what it made up. */
export interface Score {
  moves: number;
  right: number;
  wrong: number;
  /** Told to have crossed twice where it crossed once. */
  doubled: number;
  /** Went over and came back, so that nothing changed. */
  switched: number;
  switchedWithCrossing: number;
  arrivals: number;
  arrivalsInAMinute: number;
  departures: number;
  departuresInAMinute: number;
  /** Departures said to be read that did not happen. */
  falseDepartures: number;
}

/** One thing that history got wrong, for the report of a failing test. */
export type Miss = { what: string; unit: string; at: string };

const MINUTE_MS = 60_000;
const ONE_MOVE_MS = 30 * MINUTE_MS;

export const NOTHING: Score = {
  moves: 0,
  right: 0,
  wrong: 0,
  doubled: 0,
  switched: 0,
  switchedWithCrossing: 0,
  arrivals: 0,
  arrivalsInAMinute: 0,
  departures: 0,
  departuresInAMinute: 0,
  falseDepartures: 0,
};

/** Compares history with what really happened; cars whose tags are all dead are left out. */
export function scoreHistory(
  world: TwoYards,
  traffic: Traffic,
  history: History,
): { score: Score; misses: Miss[] } {
  const score = { ...NOTHING };
  const misses: Miss[] = [];
  const miss = (what: string, unit: string, at: number) =>
    misses.push({ what, unit, at: new Date(at).toISOString() });
  for (const [unit, crossings] of crossingsByUnit(traffic)) {
    scoreMoves(score, miss, history, unit, crossings);
    scoreStays(score, miss, world, history, unit, crossings);
  }
  return { score, misses };
}

export function addScores(a: Score, b: Score): Score {
  const keys = Object.keys(a) as (keyof Score)[];
  return Object.fromEntries(keys.map((key) => [key, a[key] + b[key]])) as unknown as Score;
}

type Report = (what: string, unit: string, at: number) => void;

function crossingsByUnit({ crossings }: Traffic): Map<string, TrueCrossing[]> {
  const units = new Map<string, TrueCrossing[]>();
  for (const crossing of [...crossings].sort((a, b) => a.at - b.at)) {
    if (!crossing.readable || crossing.unit.startsWith('QEOT')) continue;
    units.set(crossing.unit, [...(units.get(crossing.unit) ?? []), crossing]);
  }
  return units;
}

function sign(direction: Direction | null): number {
  return direction === null ? 0 : direction === 'increasing' ? 1 : -1;
}

/** Crossings of one read point without a longer break are one move: what counts is the net. */
function scoreMoves(
  score: Score,
  miss: Report,
  history: History,
  unit: string,
  crossings: readonly TrueCrossing[],
): void {
  const moves: TrueCrossing[][] = [];
  for (const crossing of crossings) {
    const last = moves.at(-1)?.at(-1);
    const goesOn =
      last?.readPointId === crossing.readPointId && crossing.at - last.at <= ONE_MOVE_MS;
    if (goesOn) moves.at(-1)?.push(crossing);
    else moves.push([crossing]);
  }
  for (const move of moves) {
    const [first, last] = [move[0], move.at(-1)] as [TrueCrossing, TrueCrossing];
    const net = move.reduce((sum, { direction }) => sum + sign(direction), 0);
    const [from, to] = [first.at - ONE_MOVE_MS, last.at + ONE_MOVE_MS];
    const told = (history.passes.get(first.readPointId) ?? [])
      .filter((pass) => pass.startedAt <= to && pass.endedAt >= from)
      .flatMap((pass) => pass.members)
      .filter(({ passage }) => passage.unit === unit)
      .filter(({ passage }) => passage.first.at <= to && passage.lastAt >= from)
      .reduce((sum, { role, direction }) => sum + (role === 'crossing' ? sign(direction) : 0), 0);
    if (net === 0) {
      score.switched += 1;
      if (told !== 0) score.switchedWithCrossing += 1;
      if (told !== 0) miss('switched, told to cross', unit, first.at);
      continue;
    }
    score.moves += 1;
    if (told * net > 0) score.right += 1;
    if (Math.abs(told) > 1) score.doubled += 1;
    if (told !== net)
      miss(`crossed ${net}, told ${told}, point ${first.readPointId}`, unit, first.at);
    if (told * net < 0) score.wrong += 1;
  }
}

function scoreStays(
  score: Score,
  miss: Report,
  world: TwoYards,
  history: History,
  unit: string,
  crossings: readonly TrueCrossing[],
): void {
  const stays = history.units.get(unit)?.stays ?? [];
  const departures: number[] = [];
  crossings.forEach((crossing, index) => {
    const { readPointId, at } = crossing;
    if (readPointId === world.line.id) return;
    const [before, after] = [crossings[index - 1], crossings[index + 1]];
    const siteId = readPointId === world.leadA.id ? world.yardA : world.yardB;
    const out = (readPointId === world.leadA.id) === (crossing.direction === 'increasing');
    const here = stays.filter((stay) => stay.siteId === siteId);
    const near = (told: number | null) => told !== null && Math.abs(told - at) <= MINUTE_MS;
    if (out && after?.readPointId !== readPointId) {
      departures.push(at);
      score.departures += 1;
      if (here.some((stay) => near(stay.departedAt))) score.departuresInAMinute += 1;
      else miss('departure', unit, at);
    }
    if (!out && before && before.readPointId !== readPointId) {
      score.arrivals += 1;
      if (here.some((stay) => near(stay.arrivedAt))) score.arrivalsInAMinute += 1;
      else miss('arrival', unit, at);
    }
  });
  for (const { departedAt, departureBasis } of stays) {
    if (departedAt === null || departureBasis !== 'read') continue;
    if (departures.some((at) => Math.abs(at - departedAt) <= ONE_MOVE_MS)) continue;
    score.falseDepartures += 1;
    miss('false departure', unit, departedAt);
  }
}
