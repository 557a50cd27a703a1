import type { EquipmentKind } from '../identifiers/equipment-groups.js';
import {
  Network,
  type Configuration,
  type ReadPointConfiguration,
  type UnitRef,
} from './configuration.js';
import { directPasses } from './direct-passes.js';
import { compareText, type UsableRead } from './evidence.js';
import { foldHistory, type UnitHistory } from './fold-history.js';
import { nothingKnown } from './fold-state.js';
import type { Sighting } from './fold-unit.js';
import type { WheelRecord } from './own-direction.js';
import { pointRules } from './passages.js';
import type { Pass } from './passes.js';
import { foldVisits, type StrayPassage } from './refold-point.js';
import { resolveRead, type LedgerRead } from './resolve-read.js';
import { visitsOf, type Visit } from './visits.js';

/** Everything that was ever reported, in any order, repeats included. */
export interface Ledger {
  reads: readonly LedgerRead[];
  wheels: readonly (WheelRecord & { readPointId: number })[];
}

/** What the ledger means under one configuration. */
export interface History {
  passes: Map<number, Pass[]>;
  strays: Map<number, StrayPassage[]>;
  units: Map<UnitRef, UnitHistory>;
}

/**
 * History from the whole ledger at once, the plain way: what the running projections must equal,
 * whatever way the ledger came in. Strangers go by their compact identity.
 */
export function historyOf(ledger: Ledger, configuration: Configuration): History {
  const network = new Network(configuration);
  const { passes, strays } = passesOf(network, ledger);
  directPasses(network, passes);
  const sightings = new Map<UnitRef, UnitSighting[]>();
  for (const [readPointId, ofPoint] of passes) {
    const point = network.readPoint(readPointId);
    for (const sighting of ofPoint.flatMap((pass) => sightingsOf(network, point, pass))) {
      const known = sightings.get(sighting.unit);
      if (known) known.push(sighting);
      else sightings.set(sighting.unit, [sighting]);
    }
  }
  const units = new Map<UnitRef, UnitHistory>();
  for (const [unit, own] of sightings) {
    own.sort(compareSightings);
    const registered = network.unit(unit)?.registered ?? false;
    const folded = { kind: kindOfUnit(own), registered };
    units.set(unit, foldHistory(network, folded, nothingKnown(), own));
  }
  return { passes, strays, units };
}

/** Passes and strays of each read point, directions as far as their own reads tell them. */
function passesOf(network: Network, ledger: Ledger): Pick<History, 'passes' | 'strays'> {
  const visits = new Map<number, Visit[]>();
  for (const [readPointId, units] of readsByPoint(network, ledger.reads)) {
    const gapMs = network.readPoint(readPointId).visitGapSeconds * 1000;
    const own = [...units].flatMap(([unit, reads]) => visitsOf(unit, reads, gapMs));
    visits.set(readPointId, own);
  }
  const passes = new Map<number, Pass[]>();
  const strays = new Map<number, StrayPassage[]>();
  for (const [readPointId, own] of visits) {
    const wheels = ledger.wheels.filter((record) => record.readPointId === readPointId);
    const rules = pointRules(network, network.readPoint(readPointId), wheels);
    const beside = network.parallelTo(readPointId).flatMap(({ id }) => visits.get(id) ?? []);
    const formed = foldVisits(rules, own, { here: [], parallel: beside });
    passes.set(readPointId, formed.passes);
    strays.set(readPointId, formed.strays);
  }
  return { passes, strays };
}

/** A sighting with what orders it among the unit's others. */
export interface UnitSighting extends Sighting {
  unit: UnitRef;
  kind: EquipmentKind;
  kindRank: number;
  siteCode: string;
  first: UsableRead;
}

/** Total order of sightings: time, site code, antenna number, tag. */
export function compareSightings(a: UnitSighting, b: UnitSighting): number {
  return (
    a.firstAt - b.firstAt ||
    compareText(a.siteCode, b.siteCode) ||
    a.first.antenna - b.first.antenna ||
    compareText(a.first.tag, b.first.tag)
  );
}

/** Of what its sightings say of its kind, the word that counts most. */
export function kindOfUnit(sightings: readonly UnitSighting[]): EquipmentKind {
  const first = sightings[0] as UnitSighting;
  return sightings.reduce((best, next) => (next.kindRank < best.kindRank ? next : best), first)
    .kind;
}

function readsByPoint(network: Network, reads: readonly LedgerRead[]) {
  const points = new Map<number, Map<UnitRef, UsableRead[]>>();
  for (const read of reads) {
    const resolved = resolveRead(network, read);
    const unit = resolved?.unit ?? resolved?.identity?.compact;
    if (!resolved || unit === undefined) continue;
    const units = points.get(resolved.readPointId) ?? new Map<UnitRef, UsableRead[]>();
    points.set(resolved.readPointId, units);
    const known = units.get(unit) ?? [];
    units.set(unit, known);
    known.push({ at: read.at, antenna: read.antenna, tag: read.tag });
  }
  return points;
}

/** The sightings that a pass gives its units. */
export function sightingsOf(
  network: Network,
  point: ReadPointConfiguration,
  pass: Pass,
): UnitSighting[] {
  return pass.members.map(({ passage, role, direction }) => ({
    unit: passage.unit,
    kind: passage.kind,
    kindRank: passage.kindRank,
    siteCode: network.site(point.siteId).code,
    first: passage.first,
    readPointId: point.id,
    firstAt: passage.first.at,
    lastAt: passage.lastAt,
    role,
    direction,
  }));
}
