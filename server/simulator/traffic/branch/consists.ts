import { randomOf } from '../../random.js';
import { branchCars } from '../../world/branch-cars.js';
import type { DemoTag, DemoUnit } from '../../world/equipment.js';
import { wearerAt } from '../../world/lent-tag.js';
import type { Vehicle } from '../pass.js';
import { unitNamed, type Round } from './round.js';

const numbered = (mark: string, first: number, count: number) =>
  Array.from({ length: count }, (_, index) => `${mark}${first + index}`);

const tanks = numbered('QTKX', 40_400, 8);
const flats = numbered('QWKR', 170_001, 2);
const trailers = numbered('QWTZ', 410_001, 4);
const hoppers = [
  branchCars.inTheBeam,
  branchCars.beside,
  branchCars.robbed,
  ...numbered('QWKR', 160_007, 4),
];

/** Cars of the first train, of the second, and those that stand at Pipit, in order. */
export const carsOf = {
  first: [...flats, ...tanks],
  second: hoppers,
  stored: ['QWKR160005', branchCars.impostor, 'QWKR160006'],
};

const sets = {
  first: { power: 'QWKR2101', rear: 'QWKE9101' },
  second: { power: 'QWKR2102', rear: 'QWKE9102' },
};
const SWITCHER = 'QWKR2103';

/** The first or second train of the branch as it stands at `at`, its engine ahead. */
export function trainOf(
  round: Round,
  which: 'first' | 'second',
  at: number,
  isReversed = false,
): Vehicle[] {
  const { power, rear } = sets[which];
  const cars = carsOf[which].map((compact) => vehicleOf(round, compact, at));
  const inOrder = isReversed ? cars.reverse() : cars;
  return [engineOf(power), ...inOrder, engineOf(rear)];
}

/** The engine of a train alone. */
export function lightEngine(which: 'first' | 'second'): Vehicle[] {
  return [engineOf(sets[which].power)];
}

/** The switcher of Pipit with some of the cars that stand there. */
export function storedCut(round: Round, cars: string[], at: number): Vehicle[] {
  return [engineOf(SWITCHER), ...cars.map((compact) => vehicleOf(round, compact, at))];
}

function engineOf(compact: string): Vehicle {
  return { unit: unitNamed(compact), bLeads: false, loads: [] };
}

function vehicleOf({ seed, number }: Round, compact: string, at: number): Vehicle {
  const unit = unitNamed(compact);
  // The one antenna at Pipit must see the tag that the impostor wears.
  const bLeads =
    compact === branchCars.impostor || randomOf(`${seed} way ${number} ${compact}`)() < 0.5;
  return { unit, bLeads, loads: loadsOf(compact), tags: tagsOn(unit, at) };
}

function loadsOf(compact: string): Vehicle['loads'] {
  const car = flats.indexOf(compact);
  if (car < 0) return [];
  return trailers.slice(car * 2, car * 2 + 2).map((trailer, index) => {
    const hand = index === 0 ? ('left' as const) : ('right' as const);
    return { unit: unitNamed(trailer), behindM: 6 + index * 13, hand };
  });
}

/** The tags that are on a car at `at`: some have wandered. */
function tagsOn(unit: DemoUnit, at: number): DemoTag[] {
  const { compact } = unit.identity;
  const { lent, robbed, impostor } = branchCars;
  const isThere = (tag: DemoTag) =>
    !(compact === robbed && tag.side === 'right') &&
    !(compact === lent.from && tag.side === 'left' && wearerAt(at) !== compact);
  const own = unit.tags.filter(isThere);
  if (compact === impostor) return [...own, tagOf(robbed, 'right')];
  if (compact === lent.to && wearerAt(at) === compact) return [...own, tagOf(lent.from, 'left')];
  return own;
}

/** The tag of that side which was made for the car. */
export function tagOf(compact: string, side: 'left' | 'right'): DemoTag {
  const tag = unitNamed(compact).tags.find((each) => each.side === side);
  if (!tag) throw new Error(`${compact} has no ${side} tag.`);
  return tag;
}
