import { randomOf } from '../../random.js';
import { branchCars } from '../../world/branch-cars.js';
import { carsOf } from './consists.js';
import { instantOf, type Round } from './round.js';

/** A railroad's own message about a car at the kiln, which no reader sees. */
export interface MovementReport {
  source: string;
  reference: string;
  unit: string;
  event: 'arrived' | 'departed';
  site: string;
  at: number;
}

/** What a clerk wrote down about a car. */
export interface HandReport {
  id: string;
  unit: string;
  site: string;
  track: string;
  position: number;
  seen: boolean;
  at: number;
}

/** Movement reports of one round: the second train is at the kiln from hour 6 to hour 60. */
export function movementReports(round: Round): MovementReport[] {
  return (['arrived', 'departed'] as const).flatMap((event) => {
    const at = kilnAt(round, event);
    return carsOf.second.map((unit) => ({
      source: 'kiln desk',
      reference: `${round.number}${event === 'arrived' ? 'A' : 'D'}-${unit}`,
      unit,
      event,
      site: 'BRYONY',
      at,
    }));
  });
}

/** When the second train truly came to the kiln or left it. */
export function kilnAt(round: Round, event: 'arrived' | 'departed'): number {
  return event === 'arrived'
    ? instantOf(round, 5.9, 'into the kiln')
    : instantOf(round, 60, 'out of the kiln');
}

/** Hand reports of one round: the car with two dead tags is found at Alder Bend, later gone. */
export function handReports(round: Round): HandReport[] {
  const unit = branchCars.byHand;
  const place = { unit, site: 'ALDER', track: 'Yard 7', position: 3 };
  return [
    { ...place, id: idOf(round, 'seen'), seen: true, at: instantOf(round, 14, 'yard check') },
    { ...place, id: idOf(round, 'gone'), seen: false, at: instantOf(round, 62, 'second check') },
  ];
}

/** The same UUID for the same report, so that sending it again finds a duplicate. */
function idOf({ seed, number }: Round, name: string): string {
  const random = randomOf(`${seed} hand report ${number} ${name}`);
  const digits = Array.from({ length: 32 }, () => Math.floor(random() * 16).toString(16));
  digits[12] = '4';
  digits[16] = '8';
  return digits.join('').replace(/^(.{8})(.{4})(.{4})(.{4})(.{12})$/, '$1-$2-$3-$4-$5');
}
