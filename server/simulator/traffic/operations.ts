import { between, randomOf, type Random } from '../random.js';
import { units, type DemoUnit } from '../world/equipment.js';
import type { DemoReadPoint } from '../world/read-points.js';
import { Agenda } from './agenda.js';
import { motionOf, secondsOf, type Halt } from './motion.js';
import { lengthOf, type Direction, type Pass, type Purpose, type Vehicle } from './pass.js';
import { sortings, turns } from './plan.js';
import { noteSortings } from './sorting.js';
import { HOUR, Stock, type Riding } from './stock.js';
import { noteTurn } from './train-run.js';

/** A Monday, 00:00 UTC: the invented world begins here, whatever span is asked for. */
export const EPOCH = Date.UTC(2026, 0, 5);

/** Track is kept free this long after a train, so that no two stand before one reader. */
const CLEARANCE_MS = 5 * 60_000;

/** What a train wants of a read point. */
export interface PassWish {
  point: DemoReadPoint;
  direction: Direction;
  purpose: Purpose;
  vehicles: Vehicle[];
  speedKmh: number;
  halt?: Halt | null;
  trainNumber?: number | null;
  /** Keeps the track after the pass for a move that comes back. */
  keepMs?: number;
}

/** A car left on a siding between two nodes until a later train takes it on. */
export interface OnSiding {
  riding: Riding;
  readyAt: number;
}

/**
 * The railway, run forward from EPOCH by its weekly plan: what stands where, and each pass at each
 * read point. One stream of random numbers, taken in order of time, so that the same seed always
 * gives the same history.
 */
export class Operations {
  readonly random: Random;
  readonly agenda = new Agenda();
  readonly stock: Stock;
  readonly sidings = new Map<string, OnSiding[]>();
  private readonly freeAt = new Map<DemoReadPoint, number>();
  private readonly pools: Record<'power' | 'rear' | 'strangerPower' | 'strangerRear', DemoUnit[]>;
  private passes: Pass[] = [];

  constructor(seed: string) {
    this.random = randomOf(`${seed} operations`);
    this.stock = new Stock(this.random, EPOCH);
    const pool = (flow: string) => units.filter((unit) => unit.flow === flow);
    this.pools = {
      power: pool('power'),
      rear: pool('rear'),
      strangerPower: pool('strangerPower'),
      strangerRear: pool('strangerRear'),
    };
    for (const turn of turns) noteTurn(this, turn);
    for (const sorting of sortings) noteSortings(this, sorting);
  }

  /** Runs to `until` and gives every pass that began before then and was not given yet. */
  advance(until: number): Pass[] {
    this.agenda.runUntil(until);
    const { passes } = this;
    this.passes = [];
    return passes;
  }

  /** Runs to `until` and forgets the passes on the way, a month at a time. */
  skipTo(until: number): void {
    for (let at = EPOCH; at < until; at += 720 * HOUR) this.advance(at);
    this.advance(until);
  }

  /** Locomotives or end-of-train devices of a pool, taken for good. */
  assign(pool: keyof Operations['pools'], count: number): DemoUnit[] {
    const taken = this.pools[pool].splice(0, count);
    if (taken.length < count) throw new Error(`The pool ${pool} is too small for the plan.`);
    return taken;
  }

  /** Passes the read point at `at` or as soon as its track is free, and then goes on. */
  pass(at: number, wish: PassWish, then: (end: number) => void): void {
    this.agenda.note(at, (now) => {
      const free = this.freeAt.get(wish.point) ?? 0;
      if (free > now) return this.pass(free + between(this.random, 0, 240_000), wish, then);
      const { vehicles } = wish;
      const motion = motionOf(this.random, lengthOf(vehicles), wish.speedKmh, wish.halt);
      const end = now + secondsOf(motion) * 1000;
      this.freeAt.set(wish.point, end + CLEARANCE_MS + (wish.keepMs ?? 0));
      const { point, direction, purpose, trainNumber = null } = wish;
      this.passes.push({ point, direction, purpose, vehicles, motion, at: now, trainNumber });
      then(end);
    });
  }

  /** Opens the track again for a move that kept it. */
  release(point: DemoReadPoint, at: number): void {
    this.freeAt.set(point, at);
  }

  /** Hours after `at`, as milliseconds of the epoch, between the two given. */
  later(at: number, lowHours: number, highHours: number): number {
    return Math.round(at + between(this.random, lowHours, highHours) * HOUR);
  }
}
