import type { UnitRef } from './configuration.js';
import { describePassage, joinVisits, type Passage, type PointRules } from './passages.js';
import { formPasses, type Pass } from './passes.js';
import { ALONE_MS, partStrays, type StrayReason, type Surroundings } from './strays.js';
import { mergeVisits, type Visit } from './visits.js';

/** What is stored of a pass that matters for where a refold may start and stop. */
export interface PassStart {
  startedAt: number;
  ordinal: number;
  reversal: boolean;
  cleanStart: boolean;
}

/** A stretch of one read point's history, from a clean start on, with new visits to fold in. */
export interface PointWindow {
  /** The clean start that the stretch begins with; null: the first passage ever. */
  from: PassStart | null;
  /** Visits of the stretch, the new ones folded in (see `withFresh`). */
  visits: readonly Visit[];
  around: Surroundings;
  /** Time of the latest visit that may change, ms (see `reachOfChange`). */
  changedUntil: number;
  /** Starts of the stored passes of the stretch. */
  starts: readonly PassStart[];
}

/** A visit of no train, as it is kept. */
export interface StrayPassage {
  passage: Passage;
  reason: StrayReason;
}

export interface Refolded {
  passes: Pass[];
  strays: StrayPassage[];
  /** The pass from which on everything stays as it is stored; null: none was met. */
  settledAt: PassStart | null;
}

/** Passes and strays of one read point from its visits in any order. */
export function foldVisits(
  rules: PointRules,
  visits: readonly Visit[],
  around: Surroundings,
  from: { reversal: boolean } = { reversal: false },
): Pick<Refolded, 'passes' | 'strays'> {
  const { usable, strays } = partStrays(rules, visits, around);
  return {
    passes: formPasses(rules, joinVisits(rules, usable), from),
    strays: strays.map(({ visit, reason }) => ({
      passage: describePassage(rules, visit.unit, [visit.evidence]),
      reason,
    })),
  };
}

/** Folds a stretch of a read point's history anew. */
export function refoldPoint(rules: PointRules, window: PointWindow): Refolded {
  const { passes, strays } = foldVisits(rules, window.visits, window.around, {
    reversal: window.from?.reversal ?? false,
  });
  const index = passes.findIndex(
    (pass, at) => at > 0 && pass.startedAt > window.changedUntil && isSettled(window, pass),
  );
  const settled = passes[index];
  if (!settled) return { passes, strays, settledAt: null };
  return {
    passes: passes.slice(0, index),
    strays: strays.filter(({ passage }) => passage.first.at < settled.startedAt),
    settledAt: settled,
  };
}

/** Both the stored and the new passes start afresh there, so all that follows is the same. */
function isSettled({ starts }: PointWindow, pass: Pass): boolean {
  return (
    pass.cleanStart &&
    starts.some(
      (start) =>
        start.cleanStart &&
        start.startedAt === pass.startedAt &&
        start.ordinal === pass.ordinal &&
        start.reversal === pass.reversal,
    )
  );
}

/** Stored visits with new ones folded in. */
export function withFresh(
  visits: readonly Visit[],
  fresh: readonly Visit[],
  gapMs: number,
): Visit[] {
  const touched = new Set<UnitRef>(fresh.map(({ unit }) => unit));
  const byUnit = new Map<UnitRef, Visit[]>();
  const untouched: Visit[] = [];
  for (const visit of [...visits, ...fresh]) {
    if (!touched.has(visit.unit)) untouched.push(visit);
    else byUnit.set(visit.unit, [...(byUnit.get(visit.unit) ?? []), visit]);
  }
  return [...untouched, ...[...byUnit.values()].flatMap((own) => mergeVisits(own, gapMs))];
}

/** Where a visit of a touched unit begins and ends, ms. */
export interface Span {
  firstAt: number;
  lastAt: number;
}

/**
 * From and until when visits of a read point may come out otherwise once facts of [since, until]
 * are folded in; `touched` are the stored visits of the units concerned within BESIDE_MS.
 */
export function reachOfChange(
  rules: Pick<PointRules, 'point'>,
  { since, until }: { since: number; until: number },
  touched: readonly Span[],
): { since: number; until: number } {
  // A new read may draw a stored visit that begins up to a visit gap later into its own, and
  // a car that stood alone beside the track is not alone any more.
  const reachMs = Math.max(rules.point.visitGapSeconds * 1000, ALONE_MS);
  return {
    since: Math.min(since, ...touched.map(({ firstAt }) => firstAt)),
    until: Math.max(until + reachMs, ...touched.map(({ firstAt }) => firstAt)),
  };
}
