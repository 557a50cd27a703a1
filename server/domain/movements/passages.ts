import type { EquipmentKind } from '../identifiers/equipment-groups.js';
import { resolveTag } from '../identifiers/resolve-tag.js';
import {
  LONGEST_STOP_MS,
  type Network,
  type ReadPointConfiguration,
  type UnitRef,
} from './configuration.js';
import {
  firstRead,
  groupsOf,
  lastReadAt,
  readCountOf,
  type Evidence,
  type UsableRead,
} from './evidence.js';
import {
  ownMovement,
  type AntennaOf,
  type OwnMovement,
  type WheelRecord,
} from './own-direction.js';
import { compareVisits, type Visit } from './visits.js';

/** One unit going by (or standing at) one read point, with what it says by itself. */
export interface Passage {
  unit: UnitRef;
  kind: EquipmentKind;
  /** Which word on the kind counts, lowest first: the register's, a tag's group, a text's guess. */
  kindRank: number;
  visits: Evidence[];
  first: UsableRead;
  lastAt: number;
  readCount: number;
  /** Different tags among its reads: two are hardly ever on the wrong car together. */
  tagCount: number;
  own: OwnMovement;
}

/** What the rules of one read point need besides its visits. */
export interface PointRules {
  network: Network;
  point: ReadPointConfiguration;
  /** Wheel records of this read point near the visits, by `startedAt`. */
  wheels: readonly WheelRecord[];
}

/** The rules of a read point over wheel records in any order. */
export function pointRules(
  network: Network,
  point: ReadPointConfiguration,
  wheels: readonly WheelRecord[],
): PointRules {
  return { network, point, wheels: [...wheels].sort((a, b) => a.startedAt - b.startedAt) };
}

/**
 * Passages of one read point from all visits there (in any order): consecutive visits of one unit
 * between which no other unit came are one passage where it may have stopped between the antennas.
 */
export function joinVisits(rules: PointRules, visits: readonly Visit[]): Passage[] {
  const severalOffsets = hasSeveralOffsets(rules.network, rules.point);
  const passages: Passage[] = [];
  for (const visit of [...visits].sort(compareVisits)) {
    const passage = describePassage(rules, visit.unit, [visit.evidence]);
    const before = passages.at(-1);
    if (severalOffsets && before && stoppedBetween(before, passage)) {
      const joined = [...before.visits, visit.evidence];
      passages[passages.length - 1] = describePassage(rules, visit.unit, joined);
    } else {
      passages.push(passage);
    }
  }
  return passages;
}

/** True where antennas of the read point stand at two offsets or more. */
export function hasSeveralOffsets(network: Network, point: ReadPointConfiguration): boolean {
  return network.offsetsOf(point.id) > 1;
}

function stoppedBetween(before: Passage, after: Passage): boolean {
  return (
    before.unit === after.unit &&
    after.first.at - before.lastAt <= LONGEST_STOP_MS &&
    (before.own.direction === null || after.own.direction === null)
  );
}

/** A unit's visits (in order) as one passage, with what it says by itself. */
export function describePassage(
  { network, point, wheels }: PointRules,
  unit: UnitRef,
  visits: Evidence[],
): Passage {
  const antennaOf: AntennaOf = (number) => network.antenna(point.siteId, number);
  const severalOffsets = hasSeveralOffsets(network, point);
  const first = firstRead(visits[0] as Evidence);
  const lastAt = Math.max(...visits.map(lastReadAt));
  const { kind, kindRank } = kindOf(network, unit, visits);
  const span = { firstAt: first.at, lastAt };
  const isEndOfTrain = kind === 'endOfTrain';
  const own = ownMovement(visits, span, antennaOf, wheels, { isEndOfTrain, severalOffsets });
  const readCount = visits.reduce((sum, visit) => sum + readCountOf(visit), 0);
  const tags = new Set(visits.flatMap(groupsOf).map(({ tag }) => tag));
  const tagCount = Math.min(tags.size, 255);
  return { unit, kind, kindRank, visits, first, lastAt, readCount, tagCount, own };
}

export const REGISTER_RANK = -1;
export const TEXT_RANK = 99;

/**
 * The register's kind, else what the tags of this very passage say (lowest group code first, text
 * last), so that the answer does not hang on which read of a stranger came first.
 */
function kindOf(network: Network, unit: UnitRef, visits: readonly Evidence[]) {
  const known = network.unit(unit);
  if (known?.registered) return { kind: known.kind, kindRank: REGISTER_RANK };
  let kind: EquipmentKind = 'other';
  let kindRank = Infinity;
  for (const { tag } of visits.flatMap(groupsOf)) {
    const resolved = resolveTag(tag);
    if (resolved.kind !== 'aei' && resolved.kind !== 'text') continue;
    const rank = resolved.kind === 'aei' ? resolved.groupCode : TEXT_RANK;
    if (rank < kindRank) [kind, kindRank] = [resolved.equipmentKind, rank];
  }
  return { kind, kindRank };
}
