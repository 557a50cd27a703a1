import { Trackside } from './trackside.js';
import type { TwoYards } from './two-yards.js';

/** Its compact identity. */
export const CAR = 'QTKX1';

/** A car between the two yards, with one word for each way it goes. */
export function car(world: TwoYards): {
  track: Trackside;
  intoA: (clock: string) => void;
  outOfA: (clock: string) => void;
  intoB: (clock: string) => void;
  overLine: (clock: string) => void;
} {
  const { leadA, leadB, line } = world;
  const track = new Trackside(world.configuration);
  return {
    track,
    intoA: (clock) => track.cross(leadA, CAR, clock, 'decreasing'),
    outOfA: (clock) => track.cross(leadA, CAR, clock, 'increasing'),
    intoB: (clock) => track.cross(leadB, CAR, clock, 'increasing'),
    overLine: (clock) => track.cross(line, CAR, clock, 'increasing'),
  };
}
