import { Network, type Configuration, type UnitRef } from './configuration.js';
import { directPasses } from './direct-passes.js';
import type { UsableRead } from './evidence.js';
import { foldHistory, type UnitHistory } from './fold-history.js';
import { nothingKnown } from './fold-state.js';
import type { WheelRecord } from './own-direction.js';
import { foldedUnit, kindsOf } from './kind-of-unit.js';
import { pointRules } from './passages.js';
import type { Pass } from './passes.js';
import { foldVisits, type StrayPassage } from './refold-point.js';
import { resolveRead, type LedgerRead } from './resolve-read.js';
import type { Report } from './sighting.js';
import { companionsIn, inOrder, reportsByUnit, sightingsByUnit } from './unit-facts.js';
import { visitsOf, type Visit } from './visits.js';

/** Everything that was ever reported, in any order, repeats included. */
export interface Ledger {
  reads: readonly LedgerRead[];
  wheels: readonly (WheelRecord & { readPointId: number })[];
  reports?: readonly LedgerReport[];
}

/** A report as the ledger keeps it: about whatever unit had that compact identity then. */
export interface LedgerReport extends Omit<Report, 'firstAt' | 'lastAt'> {
  identity: string;
  at: number;
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
  const sightings = sightingsByUnit(network, passes);
  const reports = reportsByUnit(network, ledger.reports ?? []);
  const companionsOf = companionsIn(network, sightings);
  const kinds = kindsOf({ passes, strays });
  const units = new Map<UnitRef, UnitHistory>();
  for (const unit of new Set([...sightings.keys(), ...reports.keys()])) {
    const facts = inOrder(network, sightings.get(unit) ?? [], reports.get(unit) ?? []);
    const folded = foldedUnit(network, kinds, unit);
    units.set(unit, foldHistory(network, folded, nothingKnown(), facts, companionsOf(unit)));
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
