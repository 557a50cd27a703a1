import type {
  AntennaConfiguration,
  Configuration,
  Direction,
  Naming,
  Place,
  ReadPointConfiguration,
  SiteConfiguration,
  UnitConfiguration,
} from '../../server/domain/movements/configuration.js';
import type { RouteEdge, RouteNode } from '../../server/domain/routes/route-graph.js';

/** The three ways a track is commonly equipped; only `sensors` has wheel sensors. */
export type Equipped = 'sensors' | 'offsets' | 'single';

type Antenna = Pick<AntennaConfiguration, 'offsetM' | 'side'>;

const ANTENNAS: Record<Equipped, Antenna[]> = {
  sensors: [
    { offsetM: 0, side: 'left' },
    { offsetM: 0, side: 'right' },
  ],
  offsets: [
    { offsetM: -3, side: 'left' },
    { offsetM: -3, side: 'right' },
    { offsetM: 3, side: 'left' },
    { offsetM: 3, side: 'right' },
  ],
  single: [{ offsetM: 0, side: 'left' }],
};

type PointOptions = Partial<Omit<ReadPointConfiguration, 'id' | 'siteId' | 'code'>>;

/** A read point with its antennas in the order left and right at each offset. */
export interface BuiltPoint {
  id: number;
  siteId: number;
  kind: Equipped;
  antennas: AntennaConfiguration[];
}

/** Builds a configuration piece by piece; what is left out takes the defaults of the product. */
export class NetworkBuilder {
  private readonly sites: SiteConfiguration[] = [];
  private readonly readPoints: ReadPointConfiguration[] = [];
  private readonly antennas: AntennaConfiguration[] = [];
  private readonly units: UnitConfiguration[] = [];
  private readonly tags: Naming[] = [];
  private readonly identities: Naming[] = [];
  private readonly routeNodes: RouteNode[] = [];
  private readonly routeEdges: RouteEdge[] = [];

  /** Adds a site with a node of the same id on the route graph, and returns that id. */
  site(code: string, options: Partial<Omit<SiteConfiguration, 'id' | 'code'>> = {}): number {
    const id = this.sites.length + 1;
    this.sites.push({
      id,
      code,
      kind: 'yard',
      returnHours: 12,
      dwellLimitHours: 48,
      leads: [],
      ...options,
    });
    this.routeNodes.push({ id, siteId: id });
    return id;
  }

  /** Adds a line read point, open line on both sides unless said otherwise. */
  readPoint(siteId: number, equipped: Equipped, options: PointOptions = {}): BuiltPoint {
    const id = this.readPoints.length + 1;
    const defaults = {
      kind: 'line' as const,
      track: null,
      decreasingPlace: null,
      increasingPlace: null,
      passGapSeconds: 180,
      visitGapSeconds: 60,
      drillMinutes: 60,
      decreasingNodes: [],
      increasingNodes: [],
    };
    this.readPoints.push({ id, siteId, code: `P${id}`, ...defaults, ...options });
    const taken = this.antennas.filter((antenna) => antenna.siteId === siteId).length;
    const antennas = ANTENNAS[equipped].map((antenna, index) => ({
      ...antenna,
      siteId,
      readPointId: id,
      number: taken + index + 1,
    }));
    this.antennas.push(...antennas);
    return { id, siteId, kind: equipped, antennas };
  }

  route(from: number, to: number, metres: number, kind: RouteEdge['kind'] = 'rail'): this {
    this.routeEdges.push({ from, to, metres, kind });
    return this;
  }

  /** Registers a unit; it is named by its compact identity unless `tags` and `identities` differ. */
  register(unit: string, kind: UnitConfiguration['kind'], named?: Partial<Naming>[]): this {
    this.units.push({ unit, kind, registered: true });
    const open = { value: unit, unit, validFrom: null, validTo: null };
    this.identities.push(...(named ?? [{}]).map((naming) => ({ ...open, ...naming })));
    return this;
  }

  build(): Configuration {
    const { sites, readPoints, antennas, units, tags, identities, routeNodes, routeEdges } = this;
    return { sites, readPoints, antennas, units, tags, identities, routeNodes, routeEdges };
  }
}

/** A place at a site, for the sides of a read point. */
export function at(siteId: number, track: string | null = null): NonNullable<Place> {
  return { siteId, track };
}

/** The direction other than the given one. */
export function opposite(direction: Direction): Direction {
  return direction === 'increasing' ? 'decreasing' : 'increasing';
}
