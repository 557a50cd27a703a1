import {
  LONGEST_STOP_MS,
  Network,
  type Configuration,
  type UnitRef,
} from '../../server/domain/movements/configuration.js';
import { directPasses } from '../../server/domain/movements/direct-passes.js';
import { foldHistory, type UnitHistory } from '../../server/domain/movements/fold-history.js';
import { changeableFrom, nothingKnown } from '../../server/domain/movements/fold-state.js';
import type { EquipmentKind } from '../../server/domain/identifiers/equipment-groups.js';
import type { Companions } from '../../server/domain/movements/companions.js';
import type { History, Ledger, LedgerReport } from '../../server/domain/movements/history-of.js';
import { foldedUnit, kindsOf } from '../../server/domain/movements/kind-of-unit.js';
import type { Report } from '../../server/domain/movements/sighting.js';
import {
  companionsIn,
  inOrder,
  reportsByUnit,
  sightingsByUnit,
  type UnitSighting,
} from '../../server/domain/movements/unit-facts.js';
import { differences, markCompanions, passText, touchedBy, type Members } from './what-changed.js';
import { WHEEL_REACH_MS } from '../../server/domain/movements/own-direction.js';
import {
  hasSeveralOffsets,
  pointRules,
  type Passage,
} from '../../server/domain/movements/passages.js';
import type { Pass } from '../../server/domain/movements/passes.js';
import {
  reachOfChange,
  refoldPoint,
  withFresh,
  type StrayPassage,
} from '../../server/domain/movements/refold-point.js';
import { ALONE_MS, PARALLEL_MS } from '../../server/domain/movements/strays.js';
import { usableReads } from './usable-reads.js';
import { visitsOf, type Visit } from '../../server/domain/movements/visits.js';

type Wheel = Ledger['wheels'][number];

interface Facts {
  visits: Visit[];
  units: Set<UnitRef>;
  since: number;
  until: number;
}

/**
 * History kept up portion by portion in memory, with the stretches of read points and the
 * checkpoints of units that the projector uses on its tables.
 */
export class RunningHistory {
  private readonly network: Network;
  private readonly passes = new Map<number, Pass[]>();
  private readonly strays = new Map<number, StrayPassage[]>();
  private readonly wheels: Wheel[] = [];
  private readonly reports: LedgerReport[] = [];
  private readonly units = new Map<UnitRef, UnitHistory>();

  constructor(configuration: Configuration) {
    this.network = new Network(configuration);
  }

  get history(): History {
    return { passes: this.passes, strays: this.strays, units: this.units };
  }

  /** Takes in a portion of the ledger in which nothing has been before. */
  take(portion: Ledger): void {
    this.wheels.push(...portion.wheels);
    const before = this.members();
    const facts = new Map<number, Facts>();
    for (const readPointId of this.network.readPoints.keys()) {
      const own = this.factsOf(readPointId, portion);
      if (own) facts.set(readPointId, own);
    }
    for (const [readPointId, own] of facts) this.foldPoint(readPointId, own);
    for (const [readPointId, own] of facts) {
      for (const { id } of this.network.parallelTo(readPointId)) {
        const [since, until] = [own.since - PARALLEL_MS, own.until + PARALLEL_MS];
        this.foldPoint(id, { ...own, visits: [], since, until });
      }
    }
    directPasses(this.network, this.passes);
    this.reports.push(...(portion.reports ?? []));
    const after = this.members();
    const known = this.known();
    const dirty = differences(before, after);
    markCompanions(known.sightings, before, after, dirty);
    for (const [unit, own] of reportsByUnit(this.network, portion.reports ?? [])) {
      const from = Math.min(...own.map(({ firstAt }) => firstAt));
      dirty.set(unit, Math.min(dirty.get(unit) ?? Infinity, from));
    }
    for (const [unit, from] of dirty) this.foldUnit(unit, from, known);
  }

  private factsOf(readPointId: number, portion: Ledger): Facts | null {
    const reads = usableReads(this.network, readPointId, portion);
    const records = portion.wheels.filter((record) => record.readPointId === readPointId);
    const times = [...reads.values()].flat().map((read) => read.at);
    const since = Math.min(...times, ...records.map((one) => one.startedAt - WHEEL_REACH_MS));
    const until = Math.max(...times, ...records.map((one) => one.endedAt + WHEEL_REACH_MS));
    if (since === Infinity) return null;
    const gapMs = this.network.readPoint(readPointId).visitGapSeconds * 1000;
    const visits = [...reads].flatMap(([unit, own]) => visitsOf(unit, own, gapMs));
    const units = new Set(reads.keys());
    for (const { unit, first, lastAt } of records.length ? this.passagesAt(readPointId) : []) {
      if (lastAt >= since && first.at <= until) units.add(unit);
    }
    return { visits, units, since, until };
  }

  private foldPoint(readPointId: number, facts: Facts): void {
    const point = this.network.readPoint(readPointId);
    const gapMs = point.visitGapSeconds * 1000;
    const stored = this.passes.get(readPointId) ?? [];
    const strays = this.strays.get(readPointId) ?? [];
    const crossing = stored.flatMap((pass) => pass.members.map(({ passage }) => passage));
    const all = [...crossing, ...strays.map(({ passage }) => passage)];
    const reach = reachOfChange({ point }, facts, touchedBy(facts, all, gapMs));
    const { since } = reach;
    const reachMs = Math.max(gapMs, ALONE_MS);
    const touching = all.filter((p) => p.lastAt >= since - reachMs && p.first.at < since);
    const before = crossing.filter(
      (p) => p.first.at < since && p.first.at >= since - LONGEST_STOP_MS,
    );
    const earliest = Math.min(
      since,
      ...touching.map((p) => p.first.at),
      ...(hasSeveralOffsets(this.network, point) ? before.slice(-1).map((p) => p.first.at) : []),
    );
    const from = stored.findLastIndex((pass) => pass.cleanStart && pass.startedAt < earliest);
    const start = stored[from]?.startedAt ?? -Infinity;
    const stretch = stored.slice(Math.max(from, 0));
    const inStretch = all.filter((p) => p.first.at >= start);
    const here = visitsIn(crossing.concat(besideOf(strays)).filter((p) => p.first.at < start));
    const parallel = this.network
      .parallelTo(readPointId)
      .flatMap(({ id }) => visitsIn(this.passagesAt(id)));
    const wheels = this.wheels.filter((record) => record.readPointId === readPointId);
    const refolded = refoldPoint(pointRules(this.network, point, wheels), {
      from: stored[from] ?? null,
      visits: withFresh(visitsIn(inStretch), facts.visits, gapMs),
      around: { here, parallel },
      changedUntil: reach.until,
      starts: stretch,
    });
    const { passes, settledAt } = refolded;
    const kept = settledAt
      ? stretch.findIndex((pass) => pass.startedAt === settledAt.startedAt)
      : stretch.length;
    this.passes.set(readPointId, [
      ...stored.slice(0, Math.max(from, 0)),
      ...passes,
      ...stretch.slice(kept),
    ]);
    const end = settledAt?.startedAt ?? Infinity;
    this.strays.set(readPointId, [
      ...strays.filter(({ passage: { first } }) => first.at < start || first.at >= end),
      ...refolded.strays,
    ]);
  }

  private passagesAt(readPointId: number): Passage[] {
    const passes = this.passes.get(readPointId) ?? [];
    const strays = this.strays.get(readPointId) ?? [];
    return [
      ...passes.flatMap((pass) => pass.members.map(({ passage }) => passage)),
      ...strays.map(({ passage }) => passage),
    ];
  }

  /** Every passage with what its unit's history takes from it. */
  private members(): Members {
    const members: Members = new Map();
    for (const [readPointId, passes] of this.passes) {
      for (const { startedAt, ordinal, members: own } of passes) {
        for (const { passage, role, direction } of own) {
          const { unit, first, lastAt, tagCount } = passage;
          const value = [startedAt, ordinal, role, direction, lastAt, tagCount].join(' ');
          const pass = passText({ readPointId, startedAt, ordinal });
          members.set(`${readPointId} ${unit} ${first.at}`, { unit, at: first.at, pass, value });
        }
      }
    }
    return members;
  }

  private foldUnit(unit: UnitRef, from: number, known: Known): void {
    const own = known.sightings.get(unit) ?? [];
    const facts = inOrder(this.network, own, known.reports.get(unit) ?? []);
    const stored = this.units.get(unit);
    const checkpoint = stored?.checkpoints.findLast(({ beforeAt }) => beforeAt <= from);
    const rest = facts.filter(({ firstAt }) => firstAt >= (checkpoint?.beforeAt ?? 0));
    const start = checkpoint && rest.length ? checkpoint : { beforeAt: 0, state: nothingKnown() };
    const later = facts.filter(({ firstAt }) => firstAt >= start.beforeAt);
    if (later.length === 0) {
      this.units.delete(unit);
      return;
    }
    const kind = foldedUnit(this.network, known.kinds, unit);
    const companions = known.companionsOf(unit);
    const folded = foldHistory(this.network, kind, start.state, later, companions);
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
      doubts: [
        ...(stored?.doubts ?? []).filter(({ at }) => at < changeable.doubtsSince),
        ...folded.doubts,
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

  /** What the folds of units need of all the rest. */
  private known(): Known {
    const sightings = sightingsByUnit(this.network, this.passes);
    return {
      sightings,
      reports: reportsByUnit(this.network, this.reports),
      companionsOf: companionsIn(this.network, sightings),
      kinds: kindsOf({ passes: this.passes, strays: this.strays }),
    };
  }
}

interface Known {
  sightings: Map<UnitRef, UnitSighting[]>;
  reports: Map<UnitRef, Report[]>;
  companionsOf: (unit: UnitRef) => Companions;
  kinds: Map<UnitRef, EquipmentKind>;
}

function visitsIn(passages: readonly Passage[]): Visit[] {
  return passages.flatMap(({ unit, visits }) => visits.map((evidence) => ({ unit, evidence })));
}

function besideOf(strays: readonly StrayPassage[]): Passage[] {
  return strays.flatMap(({ passage, reason }) => (reason === 'beside' ? [passage] : []));
}
