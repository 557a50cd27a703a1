import type { UnitRef } from './configuration.js';
import { compareReads, firstRead, lastReadAt, readCountOf, type Evidence } from './evidence.js';
import { describePassage, hasSeveralOffsets, type PointRules } from './passages.js';
import type { Visit } from './visits.js';

/** Why a visit moves nothing: heard from the next track, or standing beside this one. */
export type StrayReason = 'parallel' | 'beside';

/** A visit that is kept and shown, and no passage of a train. */
export interface Stray {
  visit: Visit;
  reason: StrayReason;
}

/** Visits that bear on those of a stretch and are not among them. */
export interface Surroundings {
  /** At the same read point, strays from the next track left out. */
  here: readonly Visit[];
  /** At its parallel read points. */
  parallel: readonly Visit[];
}

/** The same car is heard on two tracks at once within this. */
export const PARALLEL_MS = 30_000;
/** A car beside the track is read again within this. */
export const BESIDE_MS = 60 * 60_000;
/** With sensors: a train would have put other reads within this. */
export const ALONE_MS = 60_000;

/** Parts the visits of one read point into those that make passages, and strays. */
export function partStrays(
  rules: PointRules,
  visits: readonly Visit[],
  around: Surroundings,
): { usable: Visit[]; strays: Stray[] } {
  const rivals = byUnit(around.parallel);
  const outdone = visits.filter((visit) => rivals.size && isOutdone(visit, rivals));
  const parallel = new Set(outdone);
  const own = visits.filter((visit) => !parallel.has(visit));
  const beside = besideTrack(rules, own, around.here);
  return {
    usable: own.filter((visit) => !beside.has(visit)),
    strays: [
      ...outdone.map((visit): Stray => ({ visit, reason: 'parallel' })),
      ...[...beside].map((visit): Stray => ({ visit, reason: 'beside' })),
    ],
  };
}

/** Heard better at the read point of the next track; of equals the one that heard it first. */
function isOutdone(visit: Visit, rivals: Map<UnitRef, Visit[]>): boolean {
  const count = readCountOf(visit.evidence);
  return (rivals.get(visit.unit) ?? []).some((rival) => {
    if (gapBetween(visit.evidence, rival.evidence) > PARALLEL_MS) return false;
    const more = readCountOf(rival.evidence) - count;
    const earlier = compareReads(firstRead(rival.evidence), firstRead(visit.evidence)) < 0;
    return more > 0 || (more === 0 && earlier);
  });
}

/**
 * One tag at one antenna, without direction, and again so within the hour: a car that stands
 * beside the track. One antenna alone cannot tell it from a train.
 */
function besideTrack(
  rules: PointRules,
  visits: readonly Visit[],
  here: readonly Visit[],
): Set<Visit> {
  const beside = new Set<Visit>();
  const { network, point } = rules;
  if (point.kind === 'spot' || network.antennaCountOf(point.id) < 2) return beside;
  const all = [...visits, ...here];
  const own = byUnit(all);
  const severalOffsets = hasSeveralOffsets(network, point);
  for (const visit of visits) {
    const others = (own.get(visit.unit) ?? []).filter((other) => other !== visit);
    const heard = others.length ? onlyGroup(visit.evidence) : null;
    if (!heard) continue;
    const passage = describePassage(rules, visit.unit, [visit.evidence]);
    if (passage.own.direction !== null) continue;
    if (!severalOffsets && (passage.own.sensed || !isAlone(visit, all))) continue;
    const again = others.some(
      (other) =>
        gapBetween(visit.evidence, other.evidence) <= BESIDE_MS &&
        hasGroup(other.evidence, heard) &&
        describePassage(rules, other.unit, [other.evidence]).own.direction === null,
    );
    if (again) beside.add(visit);
  }
  return beside;
}

interface Heard {
  antenna: number;
  tag: string;
}

/** The one tag at one antenna that all of the visit is; null when it is more. */
export function onlyGroup(evidence: Evidence): Heard | null {
  const heard: readonly Heard[] = evidence.reads ?? evidence.groups;
  const first = heard[0] as Heard;
  return heard.every((one) => isSame(one, first)) ? first : null;
}

function hasGroup(evidence: Evidence, heard: Heard): boolean {
  return (evidence.reads ?? evidence.groups).some((one) => isSame(one, heard));
}

function isSame(a: Heard, b: Heard): boolean {
  return a.antenna === b.antenna && a.tag === b.tag;
}

function isAlone(visit: Visit, all: readonly Visit[]): boolean {
  return !all.some(
    (other) => other.unit !== visit.unit && gapBetween(visit.evidence, other.evidence) <= ALONE_MS,
  );
}

/** Time between two visits, ms; 0 or less when they overlap. */
function gapBetween(a: Evidence, b: Evidence): number {
  return Math.max(firstRead(a).at - lastReadAt(b), firstRead(b).at - lastReadAt(a));
}

function byUnit(visits: readonly Visit[]): Map<UnitRef, Visit[]> {
  const units = new Map<UnitRef, Visit[]>();
  for (const visit of visits) {
    const own = units.get(visit.unit);
    if (own) own.push(visit);
    else units.set(visit.unit, [visit]);
  }
  return units;
}
