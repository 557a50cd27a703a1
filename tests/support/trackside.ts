import { encodeAei } from '../../server/domain/identifiers/aei.js';
import type { Configuration, Direction } from '../../server/domain/movements/configuration.js';
import type { Doubt } from '../../server/domain/movements/doubt.js';
import type { Leg, Stay } from '../../server/domain/movements/fold-state.js';
import type { LastSeen } from '../../server/domain/movements/last-seen.js';
import {
  historyOf,
  type Ledger,
  type LedgerReport,
} from '../../server/domain/movements/history-of.js';
import type { Pass } from '../../server/domain/movements/passes.js';
import type { StrayPassage } from '../../server/domain/movements/refold-point.js';
import type { LedgerRead } from '../../server/domain/movements/resolve-read.js';
import type { BuiltPoint } from './network-builder.js';

const GROUP_OF_MARK: Record<string, number> = { QLR: 5, QEOT: 6, ZQXU: 10 };

/** `10:00:00.000` on 2 March 2026, or `3T10:00:00` on another day of that month; ms. */
export function time(clock: string): number {
  const [day, hours] = clock.includes('T') ? clock.split('T') : ['2', clock];
  const whole = (hours as string).length === 5 ? `${hours}:00` : hours;
  return Date.parse(`2026-03-${(day as string).padStart(2, '0')}T${whole}Z`);
}

/** The tag on one side of a unit such as `QTKX1`; its mark says of which kind it is. */
export function tagOf(unit: string, side: 'left' | 'right' = 'left'): string {
  const [, initial = '', digits = ''] = /^([A-Z]+)(\d+)$/.exec(unit) ?? [];
  // A container's compact identity ends in its check digit, which is not on the tag.
  const number = Number(initial === 'ZQXU' ? digits.slice(0, 6) : digits);
  return encodeAei({ groupCode: GROUP_OF_MARK[initial] ?? 19, initial, number, side });
}

export const STOOD_MS = 61_000;

/** What readers and wheel sensors said, put down one report at a time. */
export class Trackside {
  readonly ledger: Ledger & {
    reads: LedgerRead[];
    wheels: Ledger['wheels'][number][];
    reports: LedgerReport[];
  } = { reads: [], wheels: [], reports: [] };

  constructor(private readonly configuration: Configuration) {}

  /** One read by the `antenna`-th antenna of the read point (0, 1, …). */
  read(point: BuiltPoint, antenna: number, unit: string, clock: string, side?: 'right'): this {
    const { siteId, number } = point.antennas[antenna] as BuiltPoint['antennas'][number];
    const tag = tagOf(unit, side);
    this.ledger.reads.push({ siteId, antenna: number, tag, at: time(clock), holdCode: null });
    return this;
  }

  /** Somebody says what became of the unit at a site. */
  report(
    siteId: number,
    event: LedgerReport['event'],
    unit: string,
    clock: string,
    { basis = 'report', track = null }: Partial<Pick<LedgerReport, 'basis' | 'track'>> = {},
  ): this {
    this.ledger.reports.push({ siteId, event, identity: unit, at: time(clock), basis, track });
    return this;
  }

  /** The unit stands in the beam of the first antenna from `clock` on for STOOD_MS: presence. */
  stand(point: BuiltPoint, unit: string, clock: string): this {
    for (const later of [0, 45_000, STOOD_MS]) {
      const instant = new Date(time(clock) + later).toISOString().slice(8, 23);
      this.read(point, 0, unit, instant);
    }
    return this;
  }

  /** A wheel record; `direction` null where the sensors could not tell. */
  wheels(
    point: BuiltPoint,
    from: string,
    to: string,
    direction: Direction | null,
    speedKmh: number | null = null,
  ): this {
    const span = { startedAt: time(from), endedAt: time(to) };
    this.ledger.wheels.push({ readPointId: point.id, ...span, direction, speedKmh, axles: 4 });
    return this;
  }

  /**
   * The unit goes over the read point: with wheel sensors one read under a record of its own, with
   * two offsets a read at either, `seconds` apart (6 m: 1 second is 21.6 km/h).
   */
  cross(point: BuiltPoint, unit: string, clock: string, direction: Direction, seconds = 1): this {
    if (point.kind === 'sensors') {
      return this.read(point, 0, unit, clock).wheels(point, clock, clock, direction);
    }
    const order = direction === 'increasing' ? [0, 2] : [2, 0];
    const later = new Date(time(clock) + seconds * 1000).toISOString().slice(8, 23);
    return this.read(point, order[0] as number, unit, clock).read(
      point,
      order[1] as number,
      unit,
      later,
    );
  }

  passes(point: BuiltPoint): Pass[] {
    return historyOf(this.ledger, this.configuration).passes.get(point.id) ?? [];
  }

  strays(point: BuiltPoint): StrayPassage[] {
    return historyOf(this.ledger, this.configuration).strays.get(point.id) ?? [];
  }

  doubts(unit: string): Doubt[] {
    return historyOf(this.ledger, this.configuration).units.get(unit)?.doubts ?? [];
  }

  stays(unit: string): Stay[] {
    return historyOf(this.ledger, this.configuration).units.get(unit)?.stays ?? [];
  }

  legs(unit: string): Leg[] {
    return historyOf(this.ledger, this.configuration).units.get(unit)?.legs ?? [];
  }

  lastSeen(unit: string): LastSeen | null | undefined {
    return historyOf(this.ledger, this.configuration).units.get(unit)?.lastSeen;
  }
}
