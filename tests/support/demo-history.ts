import type {
  Configuration,
  Direction,
  Place,
} from '../../server/domain/movements/configuration.js';
import type { History, Ledger } from '../../server/domain/movements/history-of.js';
import type { Sent, TrueCrossing } from '../../server/simulator/traffic.js';
import { world, type DemoReadPoint } from '../../server/simulator/world.js';

const siteIds = new Map(world.sites.map(({ code }, index) => [code, index + 1]));
const nodeIds = new Map(world.nodes.map(({ code }, index) => [code, index + 1]));
const pointIds = new Map(world.readPoints.map((point, index) => [pointKey(point), index + 1]));

function pointKey({ site, code }: { site: string; code: string }): string {
  return `${site} ${code}`;
}

function required<T>(value: T | undefined): T {
  if (value === undefined) throw new Error('The invented region does not hang together.');
  return value;
}

const siteId = (code: string) => required(siteIds.get(code));
const placeOf = (code: string | null): Place =>
  (code && { siteId: siteId(code), track: null }) || null;

function pointOf(point: DemoReadPoint) {
  return {
    id: required(pointIds.get(pointKey(point))),
    siteId: siteId(point.site),
    code: point.code,
    kind: point.kind,
    track: point.track,
    decreasingPlace: placeOf(point.decreasingPlace),
    increasingPlace: placeOf(point.increasingPlace),
    passGapSeconds: 180,
    visitGapSeconds: 60,
    drillMinutes: 60,
  };
}

/** The invented region as the rules of movement take it; cars go by their compact identity. */
export function demoConfiguration(): Configuration {
  const registered = world.units.filter(({ owner }) => owner !== null);
  const always = { validFrom: null, validTo: null };
  return {
    sites: world.sites.map((site) => ({ ...site, id: siteId(site.code) })),
    readPoints: world.readPoints.map(pointOf),
    antennas: world.readPoints.flatMap((point) =>
      point.antennas.map((antenna) => ({
        ...antenna,
        siteId: siteId(point.site),
        readPointId: pointOf(point).id,
      })),
    ),
    units: registered.map(({ identity, kind }) => ({
      unit: identity.compact,
      kind,
      registered: true,
    })),
    tags: registered.flatMap(({ identity, tags }) =>
      tags.map(({ value }) => ({ value, unit: identity.compact, ...always })),
    ),
    identities: registered.map(({ identity }) => ({
      value: identity.compact,
      unit: identity.compact,
      ...always,
    })),
    routeNodes: world.nodes.map(({ code, site }) => ({
      id: required(nodeIds.get(code)),
      siteId: site === null ? null : siteId(site),
    })),
    routeEdges: world.edges.map(({ from, to, railMetres, kind }) => ({
      from: required(nodeIds.get(from)),
      to: required(nodeIds.get(to)),
      metres: railMetres,
      kind,
    })),
  };
}

/** What was sent, as the ledger keeps it. */
export function demoLedger(sent: Sent[]): Ledger {
  return {
    reads: sent.flatMap((each) =>
      each.kind === 'read'
        ? [
            {
              siteId: siteId(each.site),
              antenna: each.antenna,
              tag: each.tag,
              at: each.readAt,
              holdCode: null,
            },
          ]
        : [],
    ),
    wheels: sent.flatMap((each) =>
      each.kind === 'wheels'
        ? [{ ...each, readPointId: required(pointIds.get(`${each.site} ${each.readPoint}`)) }]
        : [],
    ),
  };
}

/** Shares of true crossings: how the history that was made of the reads agrees with them. */
export interface Agreement {
  crossings: number;
  directionRight: number;
  directionWrong: number;
  /** Of the true arrivals and departures, those found within a minute. */
  arrivals: number;
  departures: number;
}

/**
 * Compares history with truth at the read points of one kind of equipment. What passed a silent
 * reader is left out: no rule can find it.
 */
export function agreementOf(
  history: History,
  truth: TrueCrossing[],
  equipment: DemoReadPoint['equipment'],
): Agreement {
  const points = world.readPoints.filter(
    (point) => point.equipment === equipment && point.kind === 'line',
  );
  const keys = new Set(points.map(pointKey));
  const real = truth.filter(
    (crossing) => keys.has(`${crossing.site} ${crossing.readPoint}`) && !crossing.isSilent,
  );
  const known = directionsOf(history);
  const found = real.map((crossing) => nearest(known, crossing));
  const count = (wanted: (direction: Direction | null | undefined, index: number) => boolean) =>
    found.filter(wanted).length;
  return {
    crossings: real.length,
    directionRight: count((d, index) => d === real[index]?.direction) / real.length,
    directionWrong: count((d, index) => d != null && d !== real[index]?.direction) / real.length,
    arrivals: shareOf(history, real, 'arrive', 'arrivedAt'),
    departures: shareOf(history, real, 'depart', 'departedAt'),
  };
}

type Known = Map<string, { at: number; direction: Direction | null }[]>;

function directionsOf(history: History): Known {
  const known: Known = new Map();
  for (const [pointId, passes] of history.passes) {
    for (const { passage, direction } of passes.flatMap(({ members }) => members)) {
      const key = `${pointId} ${passage.unit}`;
      const seen = known.get(key) ?? [];
      known.set(key, seen);
      seen.push({ at: passage.first.at, direction });
    }
  }
  return known;
}

const MINUTE = 60_000;

/** The direction known of that crossing; undefined when nothing was read of it. */
function nearest(known: Known, { site, readPoint, unit, at }: TrueCrossing) {
  const seen = known.get(`${required(pointIds.get(`${site} ${readPoint}`))} ${unit}`) ?? [];
  return seen.find((passage) => Math.abs(passage.at - at) < MINUTE)?.direction;
}

function shareOf(
  history: History,
  real: TrueCrossing[],
  purpose: 'arrive' | 'depart',
  field: 'arrivedAt' | 'departedAt',
): number {
  const wanted = real.filter((crossing) => crossing.purpose === purpose);
  const found = wanted.filter(({ unit, site, at }) =>
    history.units
      .get(unit)
      ?.stays.some(
        (stay) => stay.siteId === siteId(site) && Math.abs((stay[field] ?? 0) - at) <= MINUTE,
      ),
  );
  return found.length / wanted.length;
}
