import {
  LONGEST_STOP_MS,
  Network,
  type Configuration,
  type UnitRef,
} from '../../server/domain/movements/configuration.js';
import type { UsableRead } from '../../server/domain/movements/evidence.js';
import { foldHistory, type UnitHistory } from '../../server/domain/movements/fold-history.js';
import { changeableFrom, nothingKnown } from '../../server/domain/movements/fold-state.js';
import {
  compareSightings,
  kindOfUnit,
  sightingsOf,
  type History,
  type Ledger,
  type UnitSighting,
} from '../../server/domain/movements/history-of.js';
import { WHEEL_REACH_MS } from '../../server/domain/movements/own-direction.js';
import { hasSeveralOffsets } from '../../server/domain/movements/passages.js';
import type { Pass } from '../../server/domain/movements/passes.js';
import { refoldPoint } from '../../server/domain/movements/refold-point.js';
import { resolveRead } from '../../server/domain/movements/resolve-read.js';
import { visitsOf, type Visit } from '../../server/domain/movements/visits.js';

type Wheel = Ledger['wheels'][number];

/**
 * History kept up portion by portion in memory, with the stretches of read points and the
 * checkpoints of units that the projector uses on its tables.
 */
export class RunningHistory {
  private readonly network: Network;
  private readonly passes = new Map<number, Pass[]>();
  private readonly wheels: Wheel[] = [];
  private readonly units = new Map<UnitRef, UnitHistory>();

  constructor(configuration: Configuration) {
    this.network = new Network(configuration);
  }

  get history(): History {
    return { passes: this.passes, units: this.units };
  }

  /** Takes in a portion of the ledger in which nothing has been before. */
  take(portion: Ledger): void {
    this.wheels.push(...portion.wheels);
    const dirty = new Map<UnitRef, number>();
    for (const readPointId of this.network.readPoints.keys()) {
      this.foldPoint(readPointId, portion, dirty);
    }
    for (const [unit, from] of dirty) this.foldUnit(unit, from);
  }

  private foldPoint(readPointId: number, portion: Ledger, dirty: Map<UnitRef, number>): void {
    const point = this.network.readPoint(readPointId);
    const reads = this.usableReads(readPointId, portion);
    const records = portion.wheels.filter((record) => record.readPointId === readPointId);
    const since = Math.min(
      ...[...reads.values()].flat().map((read) => read.at),
      ...records.map((record) => record.startedAt - WHEEL_REACH_MS),
    );
    const until = Math.max(
      ...[...reads.values()].flat().map((read) => read.at),
      ...records.map((record) => record.endedAt + WHEEL_REACH_MS),
    );
    if (since === Infinity) return;
    const gapMs = point.visitGapSeconds * 1000;
    const stored = this.passes.get(readPointId) ?? [];
    const members = stored.flatMap((pass) => pass.members.map(({ passage }) => passage));
    const touching = members.filter((p) => p.lastAt >= since - gapMs && p.first.at < since);
    const before = members.filter(
      (p) => p.first.at < since && p.first.at >= since - LONGEST_STOP_MS,
    );
    const earliest = Math.min(
      since,
      ...touching.map((p) => p.first.at),
      ...(hasSeveralOffsets(this.network, point) ? before.slice(-1).map((p) => p.first.at) : []),
    );
    const from = stored.findLastIndex((pass) => pass.cleanStart && pass.startedAt < earliest);
    const stretch = stored.slice(Math.max(from, 0));
    const visits = stretch.flatMap((pass) =>
      pass.members.flatMap(({ passage }) =>
        passage.visits.map((evidence): Visit => ({ unit: passage.unit, evidence })),
      ),
    );
    const fresh = [...reads].flatMap(([unit, own]) => visitsOf(unit, own, gapMs));
    const wheels = this.wheels.filter((record) => record.readPointId === readPointId);
    const { passes, settledAt } = refoldPoint(
      { network: this.network, point, wheels },
      { from: stored[from] ?? null, visits, fresh, changedUntil: until, starts: stretch },
    );
    const kept = settledAt
      ? stretch.findIndex((pass) => pass.startedAt === settledAt.startedAt)
      : stretch.length;
    const replaced = stretch.slice(0, kept);
    this.passes.set(readPointId, [
      ...stored.slice(0, Math.max(from, 0)),
      ...passes,
      ...stretch.slice(kept),
    ]);
    for (const { passage } of [...replaced, ...passes].flatMap((pass) => pass.members)) {
      dirty.set(passage.unit, Math.min(dirty.get(passage.unit) ?? Infinity, passage.first.at));
    }
  }

  private usableReads(readPointId: number, portion: Ledger): Map<UnitRef, UsableRead[]> {
    const reads = new Map<UnitRef, UsableRead[]>();
    for (const read of portion.reads) {
      const named = resolveRead(this.network, read);
      const unit = named?.unit ?? named?.identity?.compact;
      if (named?.readPointId !== readPointId || unit === undefined) continue;
      const own = reads.get(unit) ?? [];
      reads.set(unit, own);
      own.push({ at: read.at, antenna: read.antenna, tag: read.tag });
    }
    return reads;
  }

  private foldUnit(unit: UnitRef, from: number): void {
    const sightings = this.sightingsOf(unit);
    const stored = this.units.get(unit);
    const checkpoint = stored?.checkpoints.findLast(({ beforeAt }) => beforeAt <= from);
    const rest = sightings.filter(({ firstAt }) => firstAt >= (checkpoint?.beforeAt ?? 0));
    const start = checkpoint && rest.length ? checkpoint : { beforeAt: 0, state: nothingKnown() };
    const own = sightings.filter(({ firstAt }) => firstAt >= start.beforeAt);
    if (own.length === 0) {
      this.units.delete(unit);
      return;
    }
    const registered = this.network.unit(unit)?.registered ?? false;
    const folded = foldHistory(
      this.network,
      { kind: kindOfUnit(sightings), registered },
      start.state,
      own,
    );
    const changeable = changeableFrom(start.state, start.beforeAt);
    this.units.set(unit, {
      stays: [
        ...(stored?.stays ?? []).filter((stay) => !changeable.includes(stay)),
        ...folded.stays,
      ],
      legs: [
        ...(stored?.legs ?? []).filter(
          ({ toSiteId, toFirstSeenAt }) =>
            !changeable.includes({ siteId: toSiteId, firstSeenAt: toFirstSeenAt }),
        ),
        ...folded.legs,
      ],
      lastSeen: folded.lastSeen,
      checkpoints: [
        ...(stored?.checkpoints ?? []).filter(
          ({ beforeAt, opening }) => beforeAt <= start.beforeAt && opening,
        ),
        ...folded.checkpoints,
      ],
    });
  }

  private sightingsOf(unit: UnitRef): UnitSighting[] {
    return [...this.passes]
      .flatMap(([readPointId, passes]) =>
        passes.flatMap((pass) =>
          sightingsOf(this.network, this.network.readPoint(readPointId), pass),
        ),
      )
      .filter((sighting) => sighting.unit === unit)
      .sort(compareSightings);
  }
}
