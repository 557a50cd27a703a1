import { between, type Random } from '../random.js';

/** A stretch of time with one acceleration. Seconds, metres, metres a second. */
export interface Stretch {
  start: number;
  seconds: number;
  metres: number;
  speed: number;
  acceleration: number;
}

/**
 * How far the head of a train stands past a read point's zero, from the first stretch on. Grows in
 * the direction of travel; falls where the train backs up.
 */
export type Motion = Stretch[];

/** The run-up before the head reaches zero, and the way past the last car. */
export const APPROACH_M = 30;

const slowest = 5 / 3.6;
const fastest = 80 / 3.6;

/** How a train stops over the reader: where, for how long, how far it backs up before going on. */
export interface Halt {
  atM: number;
  seconds: number;
  backM: number;
}

class Builder {
  readonly stretches: Motion = [];
  private start = 0;
  private metres = -APPROACH_M;

  /** Moves by `distance` metres (negative: back), from one speed to another. */
  move(distance: number, from: number, to: number): this {
    const seconds = (2 * Math.abs(distance)) / (from + to);
    const sign = Math.sign(distance);
    const acceleration = (sign * (to - from)) / seconds;
    return this.add(seconds, sign * from, acceleration, distance);
  }

  stand(seconds: number): this {
    return this.add(seconds, 0, 0, 0);
  }

  private add(seconds: number, speed: number, acceleration: number, distance: number): this {
    const { start, metres } = this;
    this.stretches.push({ start, seconds, metres, speed, acceleration });
    this.start += seconds;
    this.metres += distance;
    return this;
  }
}

/** A motion over a train of `lengthM` that starts at `speedKmh`, with a halt or without. */
export function motionOf(
  random: Random,
  lengthM: number,
  speedKmh: number,
  halt: Halt | null = null,
): Motion {
  const first = Math.min(fastest, Math.max(slowest, speedKmh / 3.6));
  const whole = lengthM + 2 * APPROACH_M;
  if (!halt) {
    const last = Math.min(fastest, Math.max(slowest, first * between(random, 0.75, 1.3)));
    return new Builder().move(whole, first, last).stretches;
  }
  const before = halt.atM + APPROACH_M;
  const builder = new Builder().move(before, first, 0.4).stand(halt.seconds);
  if (halt.backM > 0) {
    builder.move(-halt.backM / 2, 0.3, 1.6).move(-halt.backM / 2, 1.6, 0.3);
    builder.stand(halt.seconds / 3);
  }
  return builder.move(whole - before + halt.backM, 0.4, first).stretches;
}

/** Seconds that a motion takes. */
export function secondsOf(motion: Motion): number {
  const last = motion.at(-1);
  return last ? last.start + last.seconds : 0;
}

/** Metres of the head at `seconds` into a stretch. */
export function metresAt({ metres, speed, acceleration }: Stretch, seconds: number): number {
  return metres + speed * seconds + (acceleration * seconds * seconds) / 2;
}

/** Seconds into the stretch at which the head is at `target`; null when it is not, or stands. */
function secondsAt(stretch: Stretch, target: number): number | null {
  const { speed, acceleration, seconds } = stretch;
  const rest = target - stretch.metres;
  if (speed === 0 && acceleration === 0) return null;
  if (Math.abs(acceleration) < 1e-9) return inside(rest / speed, seconds);
  const root = speed * speed + 2 * acceleration * rest;
  if (root < 0) return null;
  const direction = Math.sign(speed || acceleration);
  return inside((-speed + direction * Math.sqrt(root)) / acceleration, seconds);
}

function inside(value: number, seconds: number): number | null {
  return value >= 0 && value < seconds ? value : null;
}

/** Every moment (seconds from the start) at which the head is at `target`, with the speed then. */
export function crossings(motion: Motion, target: number): { at: number; speed: number }[] {
  return motion.flatMap((stretch) => {
    const into = secondsAt(stretch, target);
    if (into === null) return [];
    return [{ at: stretch.start + into, speed: stretch.speed + stretch.acceleration * into }];
  });
}
