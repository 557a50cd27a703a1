import { crossings, type Motion, type Stretch } from './motion.js';
import { placesOf, type Direction, type Pass } from './pass.js';
import { opposite } from './network.js';

/** What wheel sensors say of one movement, by the site's true time. */
export interface RawWheels {
  startedAt: number;
  endedAt: number;
  axles: number;
  direction: Direction;
  speedKmh: number;
}

/** Metres from a car's end to its first and last axle. */
const FROM_END_M = 1.8;

/** A record for each movement over the sensors: standing still, or turning round, ends one. */
export function renderWheels(pass: Pass): RawWheels[] {
  if (pass.point.equipment !== 'sensors') return [];
  const axles = axlePlaces(pass);
  return movementsOf(pass.motion).flatMap((stretches) => recordOf(pass, stretches, axles) ?? []);
}

function axlePlaces({ vehicles }: Pass): number[] {
  const places = placesOf(vehicles);
  return vehicles.flatMap(({ unit }, index) => {
    if (unit.kind === 'endOfTrain') return [];
    const length = unit.lengthDm / 10;
    const half = Math.ceil(unit.axles / 2);
    return Array.from({ length: unit.axles }, (_, axle) => {
      const isRear = axle >= half;
      const fromEnd = FROM_END_M + (isRear ? unit.axles - 1 - axle : axle) * 1.75;
      return (places[index] ?? 0) + (isRear ? length - fromEnd : fromEnd);
    });
  });
}

/** Stretches that follow each other in one way of travel. */
function movementsOf(motion: Motion): Stretch[][] {
  const movements: Stretch[][] = [];
  let way = 0;
  for (const stretch of motion) {
    const now = Math.sign(stretch.speed || stretch.acceleration);
    if (now !== 0 && now === way) movements.at(-1)?.push(stretch);
    else if (now !== 0) movements.push([stretch]);
    way = now;
  }
  return movements;
}

function recordOf(pass: Pass, stretches: Stretch[], axles: number[]): RawWheels | null {
  const moments = axles.flatMap((place) => crossings(stretches, place));
  if (moments.length === 0) return null;
  const times = moments.map(({ at }) => at);
  const [first, last] = [Math.min(...times), Math.max(...times)];
  const speeds = moments.map(({ speed }) => speed);
  const mean = speeds.reduce((sum, speed) => sum + speed, 0) / speeds.length;
  return {
    startedAt: pass.at + Math.round(first * 1000),
    endedAt: pass.at + Math.round(last * 1000),
    axles: moments.length,
    direction: mean > 0 ? pass.direction : opposite(pass.direction),
    speedKmh: Math.round(Math.abs(mean) * 36) / 10,
  };
}
