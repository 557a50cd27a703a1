import { canonicalEpc } from '../../domain/identifiers/epc.js';
import { encodeAei } from '../../domain/identifiers/aei.js';
import type { TagSide } from '../../domain/identifiers/aei.js';
import { CONTAINER_GROUP, type EquipmentKind } from '../../domain/identifiers/equipment-groups.js';
import { aarIdentity, isoIdentity, type Identity } from '../../domain/identifiers/identity.js';
import { randomOf } from '../random.js';
import { branchCars } from './branch-cars.js';
import { fleets, type Fleet, type Flow } from './fleets.js';

export interface DemoTag {
  /** Normalised: as it is registered and compared. */
  value: string;
  /** Null for an end-of-train device, whose one tag shows to both sides. */
  side: TagSide | null;
  /** A tag that never answers. */
  dead: boolean;
}

export interface DemoUnit {
  identity: Identity;
  kind: EquipmentKind;
  groupCode: number;
  carType: string;
  /** Code of the owner; null for a stranger, which stands on no register. */
  owner: string | null;
  lengthDm: number;
  axles: number;
  flow: Flow;
  tags: DemoTag[];
}

const GROUPS: Partial<Record<EquipmentKind, number>> = {
  car: 19,
  locomotive: 5,
  endOfTrain: 6,
  trailer: 21,
  container: CONTAINER_GROUP,
};

/** Share of tags that do not answer. */
const DEAD_SIDES = 0.04;

/** Cars with two dead tags: on the register, never read. */
const NEVER_READ = ['QTKX40388', 'QTHX61044', 'QBLX2271', 'QWKR187331'];

/** GS1 keeps prefix 952 for examples, so this asset number is nobody's. */
function epcOf(number: number, side: 0 | 1): string {
  const epc = canonicalEpc(`urn:epc:tag:giai-96:0.9521141.${number}${side}`);
  if (epc === null) throw new Error(`No EPC can be written for ${number}.`);
  return epc;
}

function tagValues(fleet: Fleet, number: number, index: number): [string, TagSide | null][] {
  const { mark: initial, lengthDm, axles } = fleet;
  const groupCode = GROUPS[fleet.kind] ?? 0;
  const aei = (side: TagSide) => encodeAei({ groupCode, initial, number, side, lengthDm, axles });
  const both = fleet.kind !== 'container' && fleet.kind !== 'endOfTrain';
  if (index < (fleet.withEpc ?? 0)) {
    const left: [string, TagSide] = [epcOf(number, 0), 'left'];
    return both ? [left, [epcOf(number, 1), 'right']] : [left];
  }
  if (fleet.kind === 'endOfTrain') return [[aei('left'), null]];
  return both
    ? [
        [aei('left'), 'left'],
        [aei('right'), 'right'],
      ]
    : [[aei('right'), 'right']];
}

function tagsOf(fleet: Fleet, number: number, index: number, compact: string): DemoTag[] {
  const random = randomOf(`dead ${compact}`);
  const spared = !['car', 'trailer'].includes(fleet.kind) || fleet.flow === 'branch';
  const tags = tagValues(fleet, number, index).map(([value, side]) => {
    return { value, side, dead: random() < DEAD_SIDES && !spared };
  });
  const isNeverRead = NEVER_READ.includes(compact) || branchCars.silent.includes(compact);
  const allDead = tags.every((tag) => tag.dead);
  return tags.map((tag, at) => ({
    ...tag,
    dead:
      isNeverRead ||
      (tag.dead && !(allDead && at === 0)) ||
      (tag.side === 'left' && compact === branchCars.lent.to),
  }));
}

function unitOf(fleet: Fleet, index: number): DemoUnit {
  const number = fleet.first + index;
  const make = fleet.kind === 'container' ? isoIdentity : aarIdentity;
  const identity = make(fleet.mark, number);
  return {
    identity,
    kind: fleet.kind,
    groupCode: GROUPS[fleet.kind] ?? 0,
    carType: fleet.carType,
    owner: fleet.owner,
    lengthDm: fleet.lengthDm,
    axles: fleet.axles,
    flow: fleet.flow,
    tags: tagsOf(fleet, number, index, identity.compact),
  };
}

/** Every car, box, locomotive and end-of-train device there is, strangers included. */
export const units: DemoUnit[] = fleets.flatMap((fleet) =>
  Array.from({ length: fleet.count }, (_, index) => unitOf(fleet, index)),
);
