import type { EquipmentKind } from '../identifiers/equipment-groups.js';
import { RouteGraph, type RouteEdge, type RouteNode } from '../routes/route-graph.js';

/** How a unit is named inside one computation: its row id in the projector, its key in tests. */
export type UnitRef = number | string;

export type Direction = 'increasing' | 'decreasing';

/** Where a crossing leads: a site (with track where known), or null for the open line. */
export type Place = { siteId: number; track: string | null } | null;

/** The site of a place; null for the open line. */
export function siteOfPlace(place: Place): number | null {
  return place?.siteId ?? null;
}

export interface SiteConfiguration {
  id: number;
  code: string;
  kind: string;
  /** A unit that goes out to the line and is back within this has only been switched. */
  returnHours: number;
  dwellLimitHours: number;
  /** The tracks by which it is entered or left, as far as somebody listed them. */
  leads: readonly SiteLead[];
}

/** A lead that is not equipped lets cars in and out unseen. */
export interface SiteLead {
  name: string;
  equipped: boolean;
}

export interface ReadPointConfiguration {
  id: number;
  siteId: number;
  code: string;
  kind: 'line' | 'spot';
  track: string | null;
  decreasingPlace: Place;
  increasingPlace: Place;
  passGapSeconds: number;
  visitGapSeconds: number;
  drillMinutes: number;
  /** Nodes of the route graph next on the line, on the side where the open line is. */
  decreasingNodes: readonly number[];
  increasingNodes: readonly number[];
}

export interface AntennaConfiguration {
  siteId: number;
  number: number;
  readPointId: number;
  /** Metres along the track, growing in the increasing direction. */
  offsetM: number;
  side: 'left' | 'right';
}

/** A tag or an identity, and the unit it names from `validFrom` to before `validTo` (ms; null open). */
export interface Naming {
  value: string;
  unit: UnitRef;
  validFrom: number | null;
  validTo: number | null;
}

export interface UnitConfiguration {
  unit: UnitRef;
  kind: EquipmentKind;
  registered: boolean;
}

/** Everything besides the ledger that history depends on. */
export interface Configuration {
  sites: SiteConfiguration[];
  readPoints: ReadPointConfiguration[];
  antennas: AntennaConfiguration[];
  units: UnitConfiguration[];
  tags: Naming[];
  identities: Naming[];
  routeNodes: RouteNode[];
  routeEdges: RouteEdge[];
}

/** Speed that fills in a departure or arrival nobody saw. */
export const REFERENCE_SPEED_KMH = 30;

/** A train that stops over a reader goes on within this; a longer gap parts everything. */
export const LONGEST_STOP_MS = 30 * 60_000;

/** A car that is not on hand is quiet after this long without a read. */
export const QUIET_HOURS = 72;

/** The configuration with what the rules look up by, ready to ask. */
export class Network {
  readonly sites: ReadonlyMap<number, SiteConfiguration>;
  readonly readPoints: ReadonlyMap<number, ReadPointConfiguration>;
  readonly routes: RouteGraph;
  private readonly antennas = new Map<number, AntennaConfiguration>();
  private readonly offsets = new Map<number, Set<number>>();
  private readonly antennaCounts = new Map<number, number>();
  private readonly parallels = new Map<number, ReadPointConfiguration[]>();
  private readonly units: ReadonlyMap<UnitRef, UnitConfiguration>;
  private readonly tags: ReadonlyMap<string, Naming[]>;
  private readonly identities: Map<string, Naming[]>;

  constructor(configuration: Configuration) {
    this.sites = new Map(configuration.sites.map((site) => [site.id, site]));
    this.readPoints = new Map(configuration.readPoints.map((point) => [point.id, point]));
    for (const antenna of configuration.antennas) {
      this.antennas.set(antennaKey(antenna.siteId, antenna.number), antenna);
      const offsets = this.offsets.get(antenna.readPointId) ?? new Set();
      this.offsets.set(antenna.readPointId, offsets.add(antenna.offsetM));
      const count = this.antennaCounts.get(antenna.readPointId) ?? 0;
      this.antennaCounts.set(antenna.readPointId, count + 1);
    }
    for (const point of configuration.readPoints) {
      const beside = configuration.readPoints.filter((other) => areParallel(point, other));
      if (beside.length) this.parallels.set(point.id, beside);
    }
    this.units = new Map(configuration.units.map((unit) => [unit.unit, unit]));
    this.tags = byValue(configuration.tags);
    this.identities = byValue(configuration.identities);
    this.routes = new RouteGraph(configuration.routeNodes, configuration.routeEdges);
  }

  /** Throws when `id` is none of the network's: the rows that name a site always have one. */
  site(id: number): SiteConfiguration {
    const site = this.sites.get(id);
    if (!site) throw new Error(`no site ${id} in the configuration`);
    return site;
  }

  /** Throws when `id` is none of the network's. */
  readPoint(id: number): ReadPointConfiguration {
    const point = this.readPoints.get(id);
    if (!point) throw new Error(`no read point ${id} in the configuration`);
    return point;
  }

  antenna(siteId: number, number: number): AntennaConfiguration | undefined {
    return this.antennas.get(antennaKey(siteId, number));
  }

  /** At how many different offsets the read point's antennas stand. */
  offsetsOf(readPointId: number): number {
    return this.offsets.get(readPointId)?.size ?? 0;
  }

  antennaCountOf(readPointId: number): number {
    return this.antennaCounts.get(readPointId) ?? 0;
  }

  /** Read points of the same site between the same two places on another track. */
  parallelTo(readPointId: number): readonly ReadPointConfiguration[] {
    return this.parallels.get(readPointId) ?? [];
  }

  /** The unit a registered tag names at `at` (ms), or undefined. */
  unitOfTag(value: string, at: number): UnitRef | undefined {
    return holderAt(this.tags.get(value), at);
  }

  /** The unit whose identity (compact form) this was at `at` (ms), or undefined. */
  unitOfIdentity(compact: string, at: number): UnitRef | undefined {
    return holderAt(this.identities.get(compact), at);
  }

  unit(unit: UnitRef): UnitConfiguration | undefined {
    return this.units.get(unit);
  }

  /** Takes in a unit off the register that the projector has just made. */
  learn(naming: Naming): void {
    const known = this.identities.get(naming.value);
    if (known) known.push(naming);
    else this.identities.set(naming.value, [naming]);
  }
}

function areParallel(a: ReadPointConfiguration, b: ReadPointConfiguration): boolean {
  return (
    a.id !== b.id &&
    a.siteId === b.siteId &&
    a.kind === 'line' &&
    b.kind === 'line' &&
    a.track !== b.track &&
    a.decreasingPlace?.siteId === b.decreasingPlace?.siteId &&
    a.increasingPlace?.siteId === b.increasingPlace?.siteId
  );
}

function antennaKey(siteId: number, number: number): number {
  return siteId * 256 + number;
}

function byValue(namings: readonly Naming[]): Map<string, Naming[]> {
  const map = new Map<string, Naming[]>();
  for (const naming of namings) {
    const known = map.get(naming.value);
    if (known) known.push(naming);
    else map.set(naming.value, [naming]);
  }
  return map;
}

/** Of several that hold at once the one registered last; the same whatever order they came in. */
function holderAt(namings: readonly Naming[] | undefined, at: number): UnitRef | undefined {
  let holder: Naming | undefined;
  for (const naming of namings ?? []) {
    if (naming.validFrom !== null && at < naming.validFrom) continue;
    if (naming.validTo !== null && at >= naming.validTo) continue;
    if (!holder || (naming.validFrom ?? -Infinity) > (holder.validFrom ?? -Infinity)) {
      holder = naming;
    }
  }
  return holder?.unit;
}
