import type { UnitRef } from './configuration.js';
import { joinVisits, type PointRules } from './passages.js';
import { formPasses, type Pass } from './passes.js';
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
  /** Stored visits of the stretch. */
  visits: readonly Visit[];
  /** Visits of the reads that have just come in. */
  fresh: readonly Visit[];
  /** Time of the latest new fact, ms: nothing changes behind the next common clean start. */
  changedUntil: number;
  /** Starts of the stored passes of the stretch. */
  starts: readonly PassStart[];
}

export interface Refolded {
  passes: Pass[];
  /** The pass from which on everything stays as it is stored; null: none was met. */
  settledAt: PassStart | null;
}

/** Folds new visits into a stretch of a read point's history. */
export function refoldPoint(rules: PointRules, window: PointWindow): Refolded {
  const gapMs = rules.point.visitGapSeconds * 1000;
  const visits = withFresh(window, gapMs);
  // A new read may draw a stored visit that begins up to a visit gap later into its own.
  const changedUntil = window.changedUntil + gapMs;
  const from = { reversal: window.from?.reversal ?? false };
  const passes = formPasses(rules, joinVisits(rules, visits), from);
  const index = passes.findIndex(
    (pass, at) => at > 0 && pass.startedAt > changedUntil && isSettled(window, pass),
  );
  const settled = passes[index];
  return settled
    ? { passes: passes.slice(0, index), settledAt: settled }
    : { passes, settledAt: null };
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

function withFresh({ visits, fresh }: PointWindow, gapMs: number): Visit[] {
  const touched = new Set<UnitRef>(fresh.map(({ unit }) => unit));
  const byUnit = new Map<UnitRef, Visit[]>();
  const untouched: Visit[] = [];
  for (const visit of [...visits, ...fresh]) {
    if (!touched.has(visit.unit)) untouched.push(visit);
    else byUnit.set(visit.unit, [...(byUnit.get(visit.unit) ?? []), visit]);
  }
  return [...untouched, ...[...byUnit.values()].flatMap((own) => mergeVisits(own, gapMs))];
}
