import type {
  Configuration,
  Direction,
  Place,
} from '../../server/domain/movements/configuration.js';
import type { History, Ledger, LedgerReport } from '../../server/domain/movements/history-of.js';
import type { Sent, SentRead } from '../../server/simulator/traffic.js';
import { towardOf } from '../../server/simulator/world/toward.js';
import { world, type DemoReadPoint } from '../../server/simulator/world.js';

const MINUTE = 60_000;

const siteIds = new Map(world.sites.map(({ code }, index) => [code, index + 1]));
const nodeIds = new Map(world.nodes.map(({ code }, index) => [code, index + 1]));
const pointIds = new Map(world.readPoints.map((point, index) => [pointKey(point), index + 1]));

/** Site and code of a read point in one. */
export function pointKey({ site, code }: { site: string; code: string }): string {
  return `${site} ${code}`;
}

function required<T>(value: T | undefined): T {
  if (value === undefined) throw new Error('The invented region does not hang together.');
  return value;
}

const siteId = (code: string) => required(siteIds.get(code));
const placeOf = (code: string | null): Place =>
  (code && { siteId: siteId(code), track: null }) || null;

/** Nodes of the open line on one side of a read point. */
function nodesOn(point: DemoReadPoint, side: 'decreasing' | 'increasing'): number[] {
  const codes = towardOf(point)[side];
  return codes.flatMap((code) => nodeIds.get(code) ?? []);
}

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
    decreasingNodes: nodesOn(point, 'decreasing'),
    increasingNodes: nodesOn(point, 'increasing'),
  };
}

/** The invented region as the rules of movement take it; cars go by their compact identity. */
export function demoConfiguration(now = Date.UTC(2026, 1, 23)): Configuration {
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
    tags: world.tagSpellsAt(now),
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

/** The verdicts of the door that are facts of the ledger. */
function holdCodeOf({ readAt, deliveredAt }: SentRead): 'clock-ahead' | 'too-old' | null {
  if (readAt > deliveredAt + 5 * MINUTE) return 'clock-ahead';
  return readAt < deliveredAt - 13 * 31 * 24 * 60 * MINUTE ? 'too-old' : null;
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
              holdCode: holdCodeOf(each),
            },
          ]
        : [],
    ),
    wheels: sent.flatMap((each) =>
      each.kind === 'wheels'
        ? [{ ...each, readPointId: required(pointIds.get(`${each.site} ${each.readPoint}`)) }]
        : [],
    ),
    reports: sent.flatMap((each) => reportOf(each) ?? []),
  };
}

function reportOf(sent: Sent): LedgerReport | null {
  if (sent.kind !== 'report' && sent.kind !== 'hand') return null;
  const facts = { identity: sent.unit, siteId: siteId(sent.site), at: sent.at };
  if (sent.kind === 'report') return { ...facts, event: sent.event, basis: 'report', track: null };
  const event = sent.seen ? 'seen' : 'notThere';
  return { ...facts, event, basis: 'hand', track: sent.track };
}

/** What was made of the reads, in the words of the truth; instants in milliseconds. */
export interface Found {
  passages: {
    point: string;
    unit: string;
    at: number;
    direction: Direction | null;
    isCrossing: boolean;
  }[];
  stays: { site: string; unit: string; arrivedAt: number | null; departedAt: number | null }[];
}

const siteCodes = new Map([...siteIds].map(([code, id]) => [id, code]));
const pointKeys = new Map([...pointIds].map(([key, id]) => [id, key]));

/** A history of the rules, to compare with the truth. */
export function foundIn({ passes, units }: History): Found {
  return {
    passages: [...passes].flatMap(([pointId, ofPoint]) =>
      ofPoint
        .flatMap(({ members }) => members)
        .map(({ passage, direction, role }) => ({
          point: required(pointKeys.get(pointId)),
          unit: String(passage.unit),
          at: passage.first.at,
          direction,
          isCrossing: role === 'crossing',
        })),
    ),
    stays: [...units].flatMap(([unit, { stays }]) =>
      stays.map(({ siteId: site, arrivedAt, departedAt }) => ({
        site: required(siteCodes.get(site)),
        unit: String(unit),
        arrivedAt,
        departedAt,
      })),
    ),
  };
}
