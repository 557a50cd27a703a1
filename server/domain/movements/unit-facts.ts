import type { Companions } from './companions.js';
import type { Network, ReadPointConfiguration, UnitRef } from './configuration.js';
import { compareReads, compareText, type UsableRead } from './evidence.js';
import type { LedgerReport } from './history-of.js';
import type { Pass, PassKey } from './passes.js';
import { departureFrom, type Fact, type Report, type Sighting } from './sighting.js';

/** A sighting with what orders it among the unit's others. */
export interface UnitSighting extends Sighting {
  unit: UnitRef;
  siteCode: string;
  first: UsableRead;
}

/** Every unit's sightings in order. */
export function sightingsByUnit(
  network: Network,
  passes: ReadonlyMap<number, readonly Pass[]>,
): Map<UnitRef, UnitSighting[]> {
  const units = new Map<UnitRef, UnitSighting[]>();
  for (const [readPointId, ofPoint] of passes) {
    const point = network.readPoint(readPointId);
    for (const sighting of ofPoint.flatMap((pass) => sightingsOf(network, point, pass))) {
      const known = units.get(sighting.unit);
      if (known) known.push(sighting);
      else units.set(sighting.unit, [sighting]);
    }
  }
  for (const own of units.values()) own.sort(compareSightings);
  return units;
}

/** The sightings that a pass gives its units. */
export function sightingsOf(
  network: Network,
  point: ReadPointConfiguration,
  pass: Pass,
): UnitSighting[] {
  const { startedAt, ordinal } = pass;
  return pass.members.map(({ passage, role, direction }) => ({
    unit: passage.unit,
    siteCode: network.site(point.siteId).code,
    first: passage.first,
    readPointId: point.id,
    firstAt: passage.first.at,
    lastAt: passage.lastAt,
    role,
    direction,
    pass: { readPointId: point.id, startedAt, ordinal },
    tagCount: passage.tagCount,
  }));
}

/** Total order of sightings: time, site code, antenna number, tag. */
export function compareSightings(a: UnitSighting, b: UnitSighting): number {
  return (
    a.firstAt - b.firstAt || compareText(a.siteCode, b.siteCode) || compareReads(a.first, b.first)
  );
}

/** Reports by the unit that had the identity then; strangers by their compact identity. */
export function reportsByUnit(
  network: Network,
  reports: readonly LedgerReport[],
): Map<UnitRef, Report[]> {
  const units = new Map<UnitRef, Report[]>();
  for (const { identity, at, ...said } of reports) {
    const unit = network.unitOfIdentity(identity, at) ?? identity;
    const report: Report = { ...said, firstAt: at, lastAt: at };
    const known = units.get(unit);
    if (known) known.push(report);
    else units.set(unit, [report]);
  }
  return units;
}

/** Sightings (in order) and reports of one unit as one history: of the same instant reads first. */
export function inOrder(
  network: Network,
  sightings: readonly Sighting[],
  reports: readonly Report[],
): Fact[] {
  if (reports.length === 0) return [...sightings];
  const siteCode = ({ siteId }: Report) => network.site(siteId).code;
  const ordered = [...reports].sort(
    (a, b) =>
      a.firstAt - b.firstAt ||
      compareText(siteCode(a), siteCode(b)) ||
      compareText(a.event, b.event) ||
      compareText(a.track ?? '', b.track ?? '') ||
      compareText(a.basis, b.basis),
  );
  const facts: Fact[] = [...sightings, ...ordered];
  // Sorting is stable, so ties keep the order that each list came in, sightings first.
  return facts.sort((a, b) => a.firstAt - b.firstAt);
}

/** What the whole of all sightings tells of the companions of each unit. */
export function companionsIn(
  network: Network,
  sightings: ReadonlyMap<UnitRef, readonly UnitSighting[]>,
): (unit: UnitRef) => Companions {
  const passes = new Map<string, Map<UnitRef, UnitSighting | null>>();
  for (const [unit, own] of sightings) {
    own.forEach(({ pass }, index) => {
      const key = keyOf(pass);
      const members = passes.get(key) ?? new Map<UnitRef, UnitSighting | null>();
      passes.set(key, members.set(unit, own[index - 1] ?? null));
    });
  }
  const othersIn = (pass: PassKey, unit: UnitRef) =>
    [...(passes.get(keyOf(pass)) ?? [])].filter(([other]) => other !== unit);
  return (unit) => ({
    leftFrom(pass, siteId) {
      const others = othersIn(pass, unit);
      const departures = others.flatMap(([, before]) =>
        before ? (departureFrom(network, before, siteId) ?? []) : [],
      );
      return { others: others.length, departures };
    },
    shared(one, other) {
      const there = new Set(othersIn(other, unit).map(([name]) => name));
      return othersIn(one, unit).filter(([name]) => there.has(name)).length;
    },
  });
}

function keyOf({ readPointId, startedAt, ordinal }: PassKey): string {
  return `${readPointId} ${startedAt} ${ordinal}`;
}
