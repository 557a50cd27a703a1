import type { DemoTag, DemoUnit } from '../world/equipment.js';
import type { DemoReadPoint } from '../world/read-points.js';
import { crossings, type Motion } from './motion.js';

export type Direction = 'increasing' | 'decreasing';

/** A box on a car: how far its tag is behind the car's leading end, and to which hand it shows. */
export interface Load {
  unit: DemoUnit;
  behindM: number;
  hand: 'left' | 'right';
}

export interface Vehicle {
  unit: DemoUnit;
  /** The B-end (of a locomotive the R-end) leads. */
  bLeads: boolean;
  loads: Load[];
  /** The tags that are on it, where they are not its own. */
  tags?: DemoTag[];
}

/**
 * What the pass is in truth: in and out for good, by on the open line, out over the lead and back,
 * or set before the reader of a spot.
 */
export type Purpose = 'arrive' | 'depart' | 'line' | 'sortOut' | 'sortBack' | 'spot';

/** A train or cut that goes by a read point, as it truly was. */
export interface Pass {
  point: DemoReadPoint;
  /** Milliseconds of the epoch at which the motion starts. */
  at: number;
  direction: Direction;
  purpose: Purpose;
  vehicles: Vehicle[];
  motion: Motion;
  /** Number that the head-end tag of the train shows, or null for none. */
  trainNumber: number | null;
  /** A read point of the next track whose antennas hear some of it, faintly. */
  faintAt?: DemoReadPoint;
}

/** Metres of couplers between two cars. */
const COUPLING_M = 0.9;

/** Metres from end to end. */
export function lengthOf(vehicles: Vehicle[]): number {
  return vehicles.reduce((sum, { unit }) => sum + unit.lengthDm / 10 + COUPLING_M, 0);
}

/** Metres from the head to the leading end of each vehicle. */
export function placesOf(vehicles: Vehicle[]): number[] {
  let place = 0;
  return vehicles.map(({ unit }) => {
    const mine = place;
    place += unit.lengthDm / 10 + COUPLING_M;
    return mine;
  });
}

/**
 * When each vehicle's middle goes over the read point for good, in milliseconds: of a train that
 * stops, backs over it and goes on, the last time where it leaves a site, else the first.
 */
export function momentsOf(pass: Pass): number[] {
  const places = placesOf(pass.vehicles);
  const leaves = pass.purpose === 'depart' || pass.purpose === 'sortOut';
  return pass.vehicles.map(({ unit }, index) => {
    const middle = (places[index] ?? 0) + unit.lengthDm / 20;
    const moments = crossings(pass.motion, middle);
    const decisive = leaves ? moments.at(-1) : moments[0];
    return pass.at + Math.round((decisive?.at ?? 0) * 1000);
  });
}

/** The same vehicles seen from the other end. */
export function turnedRound(vehicles: Vehicle[]): Vehicle[] {
  return [...vehicles].reverse().map(({ unit, bLeads, loads, ...own }) => ({
    ...own,
    unit,
    bLeads: !bLeads,
    loads: loads.map((load) => ({
      unit: load.unit,
      behindM: unit.lengthDm / 10 - load.behindM,
      hand: load.hand === 'left' ? 'right' : 'left',
    })),
  }));
}
