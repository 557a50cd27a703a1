import type { EquipmentKind } from '../identifiers/equipment-groups.js';
import {
  Network,
  type Configuration,
  type ReadPointConfiguration,
  type UnitRef,
} from './configuration.js';
import { compareText, type UsableRead } from './evidence.js';
import { foldHistory, type UnitHistory } from './fold-history.js';
import { nothingKnown } from './fold-state.js';
import type { Sighting } from './fold-unit.js';
import type { WheelRecord } from './own-direction.js';
import { joinVisits } from './passages.js';
import { formPasses, type Pass } from './passes.js';
import { resolveRead, type LedgerRead } from './resolve-read.js';
import { visitsOf } from './visits.js';

/** Everything that was ever reported, in any order, repeats included. */
export interface Ledger {
  reads: readonly LedgerRead[];
  wheels: readonly (WheelRecord & { readPointId: number })[];
}

/** What the ledger means under one configuration. */
export interface History {
  passes: Map<number, Pass[]>;
  units: Map<UnitRef, UnitHistory>;
}

/**
 * History from the whole ledger at once, the plain way: what the running projections must equal,
 * whatever way the ledger came in. Strangers go by their compact identity.
 */
export function historyOf(ledger: Ledger, configuration: Configuration): History {
  const network = new Network(configuration);
  const passes = new Map<number, Pass[]>();
  const sightings = new Map<UnitRef, UnitSighting[]>();
  for (const [readPointId, units] of readsByPoint(network, ledger.reads)) {
    const point = network.readPoint(readPointId);
    const wheels = ledger.wheels.filter((record) => record.readPointId === readPointId);
    const rules = { network, point, wheels };
    const gapMs = point.visitGapSeconds * 1000;
    const visits = [...units].flatMap(([unit, reads]) => visitsOf(unit, reads, gapMs));
    const formed = formPasses(rules, joinVisits(rules, visits));
    passes.set(readPointId, formed);
    for (const sighting of formed.flatMap((pass) => sightingsOf(network, point, pass))) {
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
  return { passes, units };
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
