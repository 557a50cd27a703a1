import { between, randomOf } from '../../random.js';
import type { DemoUnit } from '../../world/equipment.js';
import { units } from '../../world/equipment.js';
import { readPoints, type DemoReadPoint } from '../../world/read-points.js';
import { EPOCH } from '../operations.js';

const HOUR = 3_600_000;
const JITTER_MS = 5 * 60_000;

/** The trains of the branch do the same every four days. */
export const ROUND_MS = 96 * HOUR;

/** One round of the branch: its number from EPOCH on. */
export interface Round {
  seed: string;
  number: number;
  start: number;
}

/** The round that `at` falls into; negative before EPOCH. */
export function roundNumberAt(at: number): number {
  return Math.floor((at - EPOCH) / ROUND_MS);
}

export function roundOf(seed: string, number: number): Round {
  return { seed, number, start: EPOCH + number * ROUND_MS };
}

/** The instant of the round's timetable, a few minutes late by a chance that `name` decides. */
export function instantOf(round: Round, hour: number, name: string): number {
  const random = randomOf(`${round.seed} branch ${round.number} ${name}`);
  return Math.round(round.start + hour * HOUR + between(random, 0, JITTER_MS));
}

/** Hours into its round, of an instant. */
export function hourOf(at: number): number {
  return ((((at - EPOCH) % ROUND_MS) + ROUND_MS) % ROUND_MS) / HOUR;
}

const unitsByIdentity = new Map(units.map((unit) => [unit.identity.compact, unit]));

/** Throws for a car that the region does not have. */
export function unitNamed(compact: string): DemoUnit {
  const unit = unitsByIdentity.get(compact);
  if (!unit) throw new Error(`There is no ${compact} in the region.`);
  return unit;
}

/** Throws for a read point that the region does not have. */
export function pointNamed(site: string, code: string): DemoReadPoint {
  const point = readPoints.find((each) => each.site === site && each.code === code);
  if (!point) throw new Error(`${site} has no read point ${code}.`);
  return point;
}
