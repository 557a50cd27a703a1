import { randomOf } from './random.js';
import { deliveredAt, isSilent, LATEST_MS, shownAt } from './traffic/disturbances.js';
import { momentsOf, type Direction, type Pass, type Purpose } from './traffic/pass.js';
import { EPOCH, Operations } from './traffic/operations.js';
import { renderReads } from './traffic/render-reads.js';
import { renderWheels, type RawWheels } from './traffic/render-wheels.js';

/** The seed of the demo: the same for everyone, so that one demo can be told from another's. */
export const DEMO_SEED = 'fishplate';

/** What a site's reader sends about one tag; times in milliseconds of the epoch. */
export interface SentRead {
  kind: 'read';
  site: string;
  /** When it reaches the server. */
  deliveredAt: number;
  antenna: number;
  tag: string;
  readAt: number;
  rssi: number;
}

export interface SentWheels extends RawWheels {
  kind: 'wheels';
  site: string;
  deliveredAt: number;
  readPoint: string;
}

export type Sent = SentRead | SentWheels;

/** One unit's true crossing of a read point, whether anybody read it or not. */
export interface TrueCrossing {
  unit: string;
  site: string;
  readPoint: string;
  direction: Direction;
  purpose: Purpose;
  /** When its middle went by. */
  at: number;
  /** The site's reader reported nothing at all that day. */
  isSilent: boolean;
}

/** Share of reads that a reader sends twice. */
const REPEATED = 0.006;
/** A pass may put reads down up to this long after it began. */
const LONGEST_PASS_MS = 90 * 60_000;
/** Passes are made known this long before they begin, for reads before the head is at zero. */
const AHEAD_MS = 60_000;

/**
 * The traffic of the invented region: a pure function of the seed and the span. The plan is run
 * forward from a fixed Monday, about a sixth of a second a month, so that a car leaves where it
 * arrived whatever is asked for; only passes of the span are turned into reads. One generator
 * keeps its place, so that asking on and on, second by second, costs only what is new.
 */
export class Traffic {
  private operations: Operations;
  private known = EPOCH;
  private given = EPOCH;
  private pending: Sent[] = [];

  constructor(private readonly seed: string = DEMO_SEED) {
    this.operations = new Operations(seed);
  }

  /**
   * Everything that reaches the server in [from, to), by time of delivery, then site, then time
   * of reading. However a span is cut, the pieces together are the same. Nothing before EPOCH.
   */
  between(from: number, to: number): Sent[] {
    if (from !== this.given) this.restart(from);
    const passes = this.operations.advance(to + AHEAD_MS);
    this.known = Math.max(this.known, to + AHEAD_MS);
    for (const pass of passes) {
      for (const sent of sentOf(this.seed, pass)) this.pending.push(sent);
    }
    const due = this.pending.filter((sent) => sent.deliveredAt >= from && sent.deliveredAt < to);
    this.pending = this.pending.filter((sent) => sent.deliveredAt >= to);
    this.given = Math.max(from, to);
    return due.sort(byDelivery);
  }

  private restart(from: number): void {
    const start = from - LATEST_MS - LONGEST_PASS_MS;
    if (this.known > start) this.operations = new Operations(this.seed);
    this.operations.skipTo(start);
    this.pending = [];
  }
}

function byDelivery(a: Sent, b: Sent): number {
  return (
    a.deliveredAt - b.deliveredAt ||
    (a.site < b.site ? -1 : a.site > b.site ? 1 : 0) ||
    (a.kind === 'wheels' ? 0 : 1) - (b.kind === 'wheels' ? 0 : 1)
  );
}

/** What reaches the server in [from, to): see Traffic. */
export function trafficBetween(from: number, to: number, seed = DEMO_SEED): Sent[] {
  return new Traffic(seed).between(from, to);
}

/** Every true crossing in [from, to), in order of time, those that nobody read included. */
export function truthBetween(from: number, to: number, seed = DEMO_SEED): TrueCrossing[] {
  const operations = new Operations(seed);
  operations.skipTo(from - LONGEST_PASS_MS);
  return operations
    .advance(to)
    .flatMap((pass) => crossingsOf(seed, pass))
    .filter(({ at }) => at >= from && at < to)
    .sort((a, b) => a.at - b.at);
}

function crossingsOf(seed: string, pass: Pass): TrueCrossing[] {
  const { point, direction, purpose } = pass;
  const moments = momentsOf(pass);
  const silent = isSilent(seed, point.site, pass.at);
  return pass.vehicles.flatMap(({ unit, loads }, index) => {
    const at = moments[index] ?? pass.at;
    return [unit, ...loads.map((load) => load.unit)].map(({ identity }) => {
      const { site, code: readPoint } = point;
      const unit = identity.compact;
      return { unit, site, readPoint, direction, purpose, at, isSilent: silent };
    });
  });
}

function sentOf(seed: string, pass: Pass): Sent[] {
  const { site, code } = pass.point;
  if (isSilent(seed, site, pass.at)) return [];
  const random = randomOf(`${seed} pass ${site} ${code} ${pass.at}`);
  const wheels = renderWheels(pass).map((record): SentWheels => {
    const times = {
      startedAt: shownAt(site, record.startedAt),
      endedAt: shownAt(site, record.endedAt),
    };
    const delivered = deliveredAt(site, record.endedAt);
    return { ...record, ...times, kind: 'wheels', site, readPoint: code, deliveredAt: delivered };
  });
  const reads = renderReads(random, pass).flatMap((read): SentRead[] => {
    const { antenna, tag, rssi } = read;
    const readAt = shownAt(site, read.at);
    const delivered = deliveredAt(site, read.at);
    const sent: SentRead = {
      kind: 'read',
      site,
      antenna,
      tag,
      rssi,
      readAt,
      deliveredAt: delivered,
    };
    const again = { ...sent, deliveredAt: delivered + Math.round(random() * 9_000) };
    return random() < REPEATED ? [sent, again] : [sent];
  });
  return [...wheels, ...reads];
}
