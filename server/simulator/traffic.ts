import { Branch } from './traffic/branch/branch.js';
import type { HandReport, MovementReport } from './traffic/branch/told.js';
import { LATEST_MS } from './traffic/disturbances.js';
import type { Pass } from './traffic/pass.js';
import { EPOCH, Operations } from './traffic/operations.js';
import type { RawWheels } from './traffic/render-wheels.js';
import { sentOfPass, sentOfRead, sentOfReport } from './traffic/sent.js';

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

/** What a railroad tells of a car. */
export interface SentReport extends MovementReport {
  kind: 'report';
  deliveredAt: number;
}

/** What a clerk writes down about a car. */
export interface SentHandReport extends HandReport {
  kind: 'hand';
  deliveredAt: number;
}

export type Sent = SentRead | SentWheels | SentReport | SentHandReport;

/** A pass may put reads down up to this long after it began. */
export const LONGEST_PASS_MS = 90 * 60_000;
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
  private readonly branch: Branch;
  private known = EPOCH;
  private branchKnown = EPOCH;
  private given = EPOCH;
  private pending: Sent[] = [];

  constructor(private readonly seed: string = DEMO_SEED) {
    this.operations = new Operations(seed);
    this.branch = new Branch(seed);
  }

  /**
   * Everything that reaches the server in [from, to), by time of delivery, then site, then time
   * of reading. However a span is cut, the pieces together are the same. Nothing before EPOCH.
   */
  between(from: number, to: number): Sent[] {
    if (from !== this.given) this.restart(from);
    const passes = this.operations.advance(to + AHEAD_MS);
    this.known = Math.max(this.known, to + AHEAD_MS);
    this.take(passes);
    this.takeBranch(to + AHEAD_MS);
    const due = this.pending.filter((sent) => sent.deliveredAt >= from && sent.deliveredAt < to);
    this.pending = this.pending.filter((sent) => sent.deliveredAt >= to);
    this.given = Math.max(from, to);
    return due.sort(byDelivery);
  }

  private take(passes: Pass[]): void {
    for (const pass of passes) {
      for (const sent of sentOfPass(this.seed, pass)) this.pending.push(sent);
    }
  }

  private takeBranch(until: number): void {
    if (until <= this.branchKnown) return;
    const { passes, loose, reports, handReports } = this.branch.between(this.branchKnown, until);
    this.take(passes);
    for (const read of loose) this.pending.push(sentOfRead(read));
    for (const report of reports) this.pending.push(sentOfReport('report', report));
    for (const report of handReports) this.pending.push(sentOfReport('hand', report));
    this.branchKnown = until;
  }

  private restart(from: number): void {
    const start = from - LATEST_MS - LONGEST_PASS_MS;
    if (this.known > start) this.operations = new Operations(this.seed);
    this.operations.skipTo(start);
    this.branchKnown = Math.max(start, EPOCH);
    this.pending = [];
  }
}

const orders = { wheels: 0, read: 1, report: 2, hand: 3 };

function byDelivery(a: Sent, b: Sent): number {
  return (
    a.deliveredAt - b.deliveredAt ||
    (a.site < b.site ? -1 : a.site > b.site ? 1 : 0) ||
    orders[a.kind] - orders[b.kind]
  );
}

/** What reaches the server in [from, to): see Traffic. */
export function trafficBetween(from: number, to: number, seed = DEMO_SEED): Sent[] {
  return new Traffic(seed).between(from, to);
}
