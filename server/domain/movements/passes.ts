import { median } from '../statistics/theil-sen.js';
import { LONGEST_STOP_MS, type Direction } from './configuration.js';
import { hasSeveralOffsets, type Passage, type PointRules } from './passages.js';

/** What a passage is in its pass. */
export type PassageRole = 'crossing' | 'presence' | 'returned';

/** How a direction is known; from where the units were before and after where nothing else tells. */
export type DirectionBasis = 'sensors' | 'antennas' | 'history';

export interface PassMember {
  passage: Passage;
  role: PassageRole;
  direction: Direction | null;
  basis: DirectionBasis | null;
}

/** What tells passes apart; `startedAt` in ms. */
export interface PassKey {
  readPointId: number;
  startedAt: number;
  ordinal: number;
}

/** A train or cut going by a read point: consecutive passages, each unit once. */
export interface Pass {
  startedAt: number;
  /** Tells passes apart that start in the same millisecond; 0 for all others. */
  ordinal: number;
  endedAt: number;
  direction: Direction | null;
  basis: DirectionBasis | null;
  speedKmh: number | null;
  /** It began because the train before it turned back. */
  reversal: boolean;
  /** Its beginning was settled when its first passage came, so the rules may start afresh here. */
  cleanStart: boolean;
  members: PassMember[];
}

interface Draft {
  passages: Passage[];
  /** How far its passages reach, ms. */
  reach: number;
  reversal: boolean;
  cleanStart: boolean;
}

/** A passage without direction that lasts longer is a car that stands. */
export const STANDING_MS = 60_000;
const SLOW_KMH = 8;
const AFTER_END_OF_TRAIN_MS = 20_000;
const BEFORE_LOCOMOTIVE_MS = 60_000;
const MAJORITY = 0.6;

/**
 * Passes of one read point from its passages, which come ordered by first read. The rules may
 * start at any clean start instead of the first passage ever; then `reversal` says of that pass
 * what only the passages before it tell.
 */
export function formPasses(
  rules: PointRules,
  passages: readonly Passage[],
  from: { reversal: boolean } = { reversal: false },
): Pass[] {
  const drafts: Draft[] = [];
  passages.forEach((passage, index) => {
    const before = passages[index - 1];
    const later = !before || passage.first.at > before.first.at;
    const draft = drafts.at(-1);
    if (!draft || isBoundary(rules, draft, passage)) {
      const near = draft && passage.first.at - draft.reach <= LONGEST_STOP_MS;
      const reversal = draft ? Boolean(near) && opposes(draft.passages, passage) : from.reversal;
      drafts.push(draftOf([passage], reversal, later));
      return;
    }
    draft.passages.push(passage);
    draft.reach = Math.max(draft.reach, reachOf(passage));
    cutReversal(drafts, later);
    cutSecondComing(drafts, later);
  });
  return drafts.map((draft, index) => finish(rules, drafts, draft, index)).map(numberTies);
}

function draftOf(passages: Passage[], reversal: boolean, cleanStart: boolean): Draft {
  const reach = passages.reduce((far, passage) => Math.max(far, reachOf(passage)), -Infinity);
  return { passages, reach, reversal, cleanStart };
}

function isBoundary(rules: PointRules, pass: Draft, next: Passage): boolean {
  const last = pass.passages.at(-1) as Passage;
  const gap = next.first.at - pass.reach;
  const endOfTrainCame = last.kind === 'endOfTrain';
  const locomotiveComes = next.kind === 'locomotive';
  if (endOfTrainCame && gap > AFTER_END_OF_TRAIN_MS) return true;
  if (locomotiveComes && gap > BEFORE_LOCOMOTIVE_MS) return true;
  if (gap <= rules.point.passGapSeconds * 1000) return false;
  const mayHaveStopped =
    gap <= LONGEST_STOP_MS && isSlow(last) && isSlow(next) && !opposes(pass.passages, next);
  return !mayHaveStopped || endOfTrainCame || locomotiveComes;
}

/** A standing car never extends a pass: it reaches no further than a minute. */
function reachOf(passage: Passage): number {
  const standing = passage.own.direction === null;
  return standing ? Math.min(passage.lastAt, passage.first.at + STANDING_MS) : passage.lastAt;
}

function isSlow({ own }: Passage): boolean {
  return own.speedKmh === null || own.speedKmh < SLOW_KMH;
}

function lastKnown(passages: readonly Passage[]): number {
  return passages.findLastIndex((passage) => passage.own.direction !== null);
}

function opposes(pass: readonly Passage[], next: Passage): boolean {
  const known = pass[lastKnown(pass)]?.own.direction ?? null;
  return known !== null && next.own.direction !== null && known !== next.own.direction;
}

/** Cuts the last draft where its newest passage goes against the direction known before. */
function cutReversal(drafts: Draft[], later: boolean): void {
  const { passages } = drafts.at(-1) as Draft;
  const newest = passages.at(-1) as Passage;
  const earlier = passages.slice(0, -1);
  if (!opposes(earlier, newest)) return;
  cutAtWidestGap(drafts, lastKnown(earlier), { reversal: true, later });
}

/** A pass holds each unit once: cuts the last draft where its newest unit has been before. */
function cutSecondComing(drafts: Draft[], later: boolean): void {
  const { passages } = drafts.at(-1) as Draft;
  const newest = passages.at(-1) as Passage;
  const before = passages.findIndex((passage) => passage.unit === newest.unit);
  if (before === passages.length - 1) return;
  cutAtWidestGap(drafts, before, { reversal: false, later });
}

/** Cuts the last draft at the widest gap after its passage `from`; the earliest of equal ones. */
function cutAtWidestGap(
  drafts: Draft[],
  from: number,
  { reversal, later }: { reversal: boolean; later: boolean },
): void {
  const draft = drafts.at(-1) as Draft;
  let reach = -Infinity;
  let widest = -Infinity;
  let cut = from + 1;
  draft.passages.forEach((passage, index) => {
    if (index > from && passage.first.at - reach > widest) {
      [widest, cut] = [passage.first.at - reach, index];
    }
    if (index >= from) reach = Math.max(reach, reachOf(passage));
  });
  const head = draft.passages.slice(0, cut);
  const tail = draft.passages.slice(cut);
  drafts[drafts.length - 1] = draftOf(head, draft.reversal, draft.cleanStart);
  drafts.push(draftOf(tail, reversal, later && tail.length === 1));
}

function finish(rules: PointRules, drafts: readonly Draft[], draft: Draft, index: number): Pass {
  const { passages, reversal, cleanStart, reach: endedAt } = draft;
  const { direction, basis } = directionOf(passages);
  const startedAt = (passages[0] as Passage).first.at;
  const pass: Omit<Pass, 'members'> = {
    startedAt,
    ordinal: 0,
    endedAt,
    direction,
    basis,
    speedKmh: speedOf(passages),
    reversal,
    cleanStart,
  };
  const turnsNext = drafts[index + 1]?.reversal ?? false;
  const besideCut = hasSeveralOffsets(rules.network, rules.point)
    ? besideReversal(passages, reversal, turnsNext)
    : new Set<Passage>();
  const members = passages.map((passage) => memberOf(pass, passage, besideCut.has(passage)));
  return { ...pass, members };
}

/**
 * A pass of which its own reads tell no direction, with the one that history tells (null: none).
 * Whoever did not turn back went with it.
 */
export function withHistory(pass: Pass, direction: Direction | null): Pass {
  const basis = direction && 'history';
  const members = pass.members.map((member): PassMember => {
    if (member.role === 'returned') return member;
    return { ...member, role: direction ? 'crossing' : 'presence', direction, basis };
  });
  return { ...pass, direction, basis, members };
}

/** Nothing that was read of the pass itself tells its direction. */
export function isUndirected({ basis }: Pick<Pass, 'basis'>): boolean {
  return basis === null || basis === 'history';
}

function directionOf(passages: readonly Passage[]): Pick<Pass, 'direction' | 'basis'> {
  const known = passages.filter((passage) => passage.own.direction !== null);
  for (const direction of ['increasing', 'decreasing'] as const) {
    const agreeing = known.filter((passage) => passage.own.direction === direction);
    if (known.length === 0 || agreeing.length / known.length < MAJORITY) continue;
    const bySensors = agreeing.some((passage) => passage.own.basis === 'sensors');
    return { direction, basis: bySensors ? 'sensors' : 'antennas' };
  }
  return { direction: null, basis: null };
}

function memberOf(pass: Omit<Pass, 'members'>, passage: Passage, besideCut: boolean): PassMember {
  const { own } = passage;
  if (own.returned) return { passage, role: 'returned', direction: null, basis: null };
  if (own.direction) {
    return { passage, role: 'crossing', direction: own.direction, basis: own.basis };
  }
  const outsideRecords = pass.basis === 'sensors' && !own.sensed;
  if (!pass.direction || outsideRecords || besideCut) {
    return { passage, role: 'presence', direction: null, basis: null };
  }
  return { passage, role: 'crossing', direction: pass.direction, basis: pass.basis };
}

/** Passages without direction between the cut of a reversal and the first that has one. */
function besideReversal(passages: readonly Passage[], atStart: boolean, atEnd: boolean) {
  const beside = new Set<Passage>();
  const known = passages.findIndex((passage) => passage.own.direction !== null);
  if (known < 0) return beside;
  if (atStart) passages.slice(0, known).forEach((passage) => beside.add(passage));
  if (atEnd) passages.slice(lastKnown(passages) + 1).forEach((passage) => beside.add(passage));
  return beside;
}

/** Middle speed of those that tell one, km/h to two places; null when none does. */
function speedOf(passages: readonly Passage[]): number | null {
  const middle = median(passages.flatMap(({ own }) => own.speedKmh ?? []));
  return middle === null ? null : Math.round(middle * 100) / 100;
}

function numberTies(pass: Pass, index: number, passes: readonly Pass[]): Pass {
  let ordinal = 0;
  while (passes[index - ordinal - 1]?.startedAt === pass.startedAt) ordinal += 1;
  return { ...pass, ordinal };
}
