import type { Companions } from './companions.js';
import { LONGEST_STOP_MS, type Direction, type Network, type Place } from './configuration.js';
import { corroborates, doubtOf, metresTooFar, type Doubt } from './doubt.js';
import { applyReport } from './fold-reports.js';
import { arrive, bePresent, leave, moveWithin, passOnLine, type Step } from './fold-rules.js';
import { noRows, type FoldRows, type FoldState } from './fold-state.js';
import {
  instantOf,
  isReport,
  moveOf,
  type Fact,
  type Move,
  type Report,
  type Sighting,
} from './sighting.js';

/** What the fold of one unit knows besides its facts. */
export interface FoldContext {
  network: Network;
  companions: Companions;
  /** False for boxes, which ride: no rail metres until it is known on what. */
  countsMiles: boolean;
}

/** The state after a fact, and the rows that nothing later can change any more. */
export interface FoldStep {
  state: FoldState;
  done: FoldRows;
}

const MINUTE_MS = 60_000;
const HOUR_MS = 60 * MINUTE_MS;

/** Folds the next fact of a unit (in order of first reads) into its state. */
export function foldFact(context: FoldContext, before: FoldState, fact: Fact): FoldStep {
  const settled = settleDoubt(context, before, fact);
  if (isReport(fact)) return joined(settled, foldReport(context, settled.state, fact));
  const doubt = doubtOf(context.network, settled.state.previous, fact);
  const corroboratedBy = doubt && witnessOf(context, settled.state, fact);
  if (doubt && !corroboratedBy) {
    return { ...settled, state: { ...settled.state, doubted: { sighting: fact, doubt } } };
  }
  const step = joined(settled, foldSighting(context, settled.state, fact));
  if (doubt) step.done.doubts.push({ ...doubt, corroboratedBy });
  return step;
}

/** A doubted sighting counts after all when the next one fits it and not what was before. */
function settleDoubt(context: FoldContext, before: FoldState, fact: Fact): FoldStep {
  const state: FoldState = { ...before, doubted: null };
  const done = noRows();
  if (!before.doubted) return { state, done };
  const { sighting, doubt } = before.doubted;
  const counts = !isReport(fact) && corroborates(context.network, before.previous, sighting, fact);
  const settled: Doubt = { ...doubt, corroboratedBy: counts ? 'point' : null };
  const step = counts ? foldSighting(context, state, sighting) : { state, done };
  step.done.doubts.push(settled);
  return step;
}

function witnessOf(
  { companions }: FoldContext,
  { previous }: FoldState,
  { tagCount, pass }: Sighting,
): Doubt['corroboratedBy'] {
  if (tagCount > 1) return 'side';
  return previous?.pass && companions.shared(previous.pass, pass) > 0 ? 'mates' : null;
}

function joined(first: FoldStep, { state, done }: FoldStep): FoldStep {
  return {
    state,
    done: {
      stays: [...first.done.stays, ...done.stays],
      legs: [...first.done.legs, ...done.legs],
      doubts: [...first.done.doubts, ...done.doubts],
    },
  };
}

function foldSighting(context: FoldContext, before: FoldState, sighting: Sighting): FoldStep {
  if (isSameCrossing(before, sighting)) return goOn(before, sighting);
  const { network } = context;
  const move = moveOf(network, sighting);
  const drill = struckDrill(network, before, sighting);
  if (drill) {
    const step = startStep(context, drill.before, sighting, drill.at);
    bePresent(step, move.to, { lingering: false, spot: false });
    return { state: step.state, done: step.done };
  }
  const step = startStep(context, before, sighting, instantOf(sighting, move));
  step.done = settledRows(before.held);
  apply(step, move, before);
  return { state: step.state, done: step.done };
}

/** A report that no train could bear out moves nothing. */
function foldReport(context: FoldContext, before: FoldState, report: Report): FoldStep {
  const { network } = context;
  const { siteId, firstAt } = report;
  if (before.previous && metresTooFar(network, before.previous, siteId, firstAt) !== null) {
    return { state: before, done: noRows() };
  }
  const step = startStep(context, before, report, firstAt);
  step.done = settledRows(before.held);
  applyReport(step, report);
  return { state: step.state, done: step.done };
}

/** A car that stopped astride the reader is read again on its way: it has not crossed twice. */
function isSameCrossing({ previous }: FoldState, sighting: Sighting): boolean {
  return (
    (previous?.direction ?? null) !== null &&
    previous !== null &&
    sighting.role === 'crossing' &&
    previous.readPointId === sighting.readPointId &&
    previous.direction === sighting.direction &&
    sighting.firstAt - previous.at <= LONGEST_STOP_MS
  );
}

function goOn(before: FoldState, { lastAt }: Sighting): FoldStep {
  const previous = before.previous && {
    ...before.previous,
    at: Math.max(before.previous.at, lastAt),
  };
  const stay = before.stay && {
    ...before.stay,
    lastSeenAt: Math.max(before.stay.lastSeenAt, lastAt),
  };
  return { state: { ...before, previous, stay }, done: noRows() };
}

/** Rows that later facts may still change. */
export function openRows(state: FoldState): FoldRows {
  return {
    stays: [...state.held.stays, ...(state.stay ? [state.stay] : [])],
    legs: [...state.held.legs, ...(state.leg ? [state.leg] : [])],
    doubts: state.doubted ? [state.doubted.doubt] : [],
  };
}

function startStep(
  { network, companions, countsMiles }: FoldContext,
  before: FoldState,
  fact: Fact,
  at: number,
): Step {
  const stay = before.stay && { ...before.stay, arrivalFinalAt: null };
  const state = { ...before, stay, drill: null, held: noRows() };
  return { network, companions, state, fact, at, countsMiles, done: noRows() };
}

/** Rows whose drill was not struck: the departure stands. */
function settledRows(held: FoldRows): FoldRows {
  return {
    stays: held.stays.map((stay) => ({ ...stay, departureFinalAt: null })),
    legs: [...held.legs],
    doubts: [...held.doubts],
  };
}

function apply(step: Step, { kind, from, to }: Move, before: FoldState): void {
  const place = from ?? to;
  if (!place) return passOnLine(step);
  if (kind === 'spot') return bePresent(step, place, { lingering: false, spot: true });
  if (kind === 'presence')
    return bePresent(step, whereItIs(step, from, to), { lingering: true, spot: false });
  if (!from && to) return arrive(step, to);
  if (from && !to) return leave(step, from.siteId);
  if (from && to && from.siteId === to.siteId) return moveWithin(step, to);
  if (to && isStillAt(step, to.siteId)) return arrive(step, to);
  crossBetween(step, from as NonNullable<Place>, to as NonNullable<Place>, before);
}

/** It crosses in where it already is, and not long unseen: nobody saw it step out and back. */
function isStillAt({ network, state, at }: Step, siteId: number): boolean {
  const { stay, previous } = state;
  if (stay?.siteId !== siteId || stay.departedAt !== null || !previous) return false;
  return at - previous.at < network.site(siteId).returnHours * HOUR_MS;
}

/** Without direction between two sites it is where it already was, else nobody can tell. */
function whereItIs(step: Step, from: Place, to: Place): Place {
  if (!from || !to) return from ?? to;
  if (from.siteId === to.siteId) return { siteId: from.siteId, track: null };
  const { stay } = step.state;
  const open = stay && stay.departedAt === null ? stay.siteId : null;
  const place = [from, to].find(({ siteId }) => siteId === open);
  return place ? { siteId: place.siteId, track: null } : null;
}

/** Out of one site and into the next at the same instant; crossing back soon strikes both. */
function crossBetween(
  step: Step,
  from: NonNullable<Place>,
  to: NonNullable<Place>,
  before: FoldState,
): void {
  const { network, fact, at, state } = step;
  if (isReport(fact)) return;
  const earlier = step.done;
  const finalAt = at + network.readPoint(fact.readPointId).drillMinutes * MINUTE_MS;
  step.done = noRows();
  leave(step, from.siteId);
  arrive(step, to);
  if (state.stay) state.stay.arrivalFinalAt = finalAt;
  const left = step.done.stays.at(-1);
  if (left) left.departureFinalAt = finalAt;
  state.held = step.done;
  state.drill = {
    before: { ...before, drill: null, held: noRows() },
    readPointId: fact.readPointId,
    direction: fact.direction as Direction,
    at,
  };
  step.done = earlier;
}

function struckDrill(network: Network, { drill }: FoldState, sighting: Sighting) {
  if (!drill || sighting.role !== 'crossing') return null;
  if (sighting.readPointId !== drill.readPointId) return null;
  const limit = drill.at + network.readPoint(drill.readPointId).drillMinutes * MINUTE_MS;
  return sighting.direction !== drill.direction && sighting.firstAt <= limit ? drill : null;
}
