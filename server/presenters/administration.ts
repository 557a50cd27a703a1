import type {
  AntennaView,
  OrganisationView,
  PersonView,
  ReadPointView,
  RegisteredView,
  RouteEdgeView,
  RouteNodeView,
  SiteView,
} from '../contract/administration-answers.js';
import type { HeartbeatView } from '../contract/heartbeat.js';
import type { Identity } from '../models/identity.js';
import type { Organisation } from '../models/organisation.js';
import type { Person } from '../models/person.js';
import type { ReadPoint } from '../models/read-point.js';
import type { RouteNode } from '../models/route-node.js';
import type { Site } from '../models/site.js';
import type { Tag } from '../models/tag.js';
import type { Unit } from '../models/unit.js';
import { rolesOf } from '../policies/actor.js';
import { leadsOf } from './leads.js';
import { linesOf } from './lines-of.js';

export function presentOrganisation(organisation: Organisation): OrganisationView {
  const { code, name, kind } = organisation;
  return { code, name, kind: kind as OrganisationView['kind'] };
}

/** Needs the person's organisation and sites loaded; never shows anything of the password. */
export function presentPerson(person: Person): PersonView {
  return {
    id: person.id,
    email: person.email,
    name: person.name,
    roles: rolesOf(person.roles),
    organisation: person.organisation?.code ?? null,
    sites: (person.sites ?? []).map((site) => site.code).sort(),
    timeZone: person.timeZone,
    canSignIn: person.passwordHash !== null,
  };
}

/** Code and name; the rest with `details`; the reader's last word where one is given, or null. */
export function presentSite(
  site: Site,
  details: boolean,
  heartbeat?: HeartbeatView | null,
): SiteView {
  const { code, name } = site;
  if (!details) return { code, name };
  return {
    code,
    name,
    kind: site.kind as SiteView['kind'],
    latitude: Number(site.latitude),
    longitude: Number(site.longitude),
    timeZone: site.timeZone,
    returnHours: Number(site.returnHours),
    dwellLimitHours: Number(site.dwellLimitHours),
    leads: leadsOf(site.leads),
    ...(heartbeat !== undefined && { heartbeat }),
  };
}

/** `codes`: site codes by id, of its own site and of the sites on its sides. */
export function presentReadPoint(
  readPoint: ReadPoint,
  codes: ReadonlyMap<number, string>,
): ReadPointView {
  const place = (siteId: number | null, track: string | null) =>
    siteId === null ? null : { site: codes.get(siteId) ?? '', track };
  const lines = linesOf(readPoint.toward);
  return {
    site: codes.get(readPoint.siteId) ?? '',
    code: readPoint.code,
    name: readPoint.name,
    track: readPoint.track,
    kind: readPoint.kind as ReadPointView['kind'],
    decreasingPlace: place(readPoint.decreasingSiteId, readPoint.decreasingTrack),
    increasingPlace: place(readPoint.increasingSiteId, readPoint.increasingTrack),
    decreasingToward: lines.decreasing,
    increasingToward: lines.increasing,
    passGapSeconds: readPoint.passGapSeconds,
    visitGapSeconds: readPoint.visitGapSeconds,
    drillMinutes: readPoint.drillMinutes,
  };
}

export function presentAntenna(antenna: {
  site: string;
  readPoint: string;
  number: number;
  offsetM: number;
  side: string;
}): AntennaView {
  const { site, readPoint, number, offsetM } = antenna;
  return {
    site,
    readPoint,
    number,
    offsetM: Number(offsetM),
    side: antenna.side as AntennaView['side'],
  };
}

/** `codes`: site codes by id. */
export function presentRouteNode(
  node: RouteNode,
  codes: ReadonlyMap<number, string>,
): RouteNodeView {
  return {
    code: node.code,
    name: node.name,
    latitude: Number(node.latitude),
    longitude: Number(node.longitude),
    site: node.siteId === null ? null : (codes.get(node.siteId) ?? null),
  };
}

export function presentRouteEdge(edge: {
  id: number;
  from: string;
  to: string;
  railMetres: number;
  kind: string;
  line: string;
}): RouteEdgeView {
  const { id, from, to, railMetres, line } = edge;
  return { id, from, to, railMetres, kind: edge.kind as RouteEdgeView['kind'], line };
}

/** A unit as the register has it. */
export function presentRegistered({
  unit,
  identity,
  formerly,
  owner,
  tags,
}: {
  unit: Unit;
  identity: Identity;
  formerly: Identity[];
  owner: Pick<Organisation, 'code'> | null;
  tags: Tag[];
}): RegisteredView {
  return {
    unitId: identity.compact,
    display: identity.display,
    scheme: identity.scheme as RegisteredView['scheme'],
    kind: unit.kind as RegisteredView['kind'],
    carType: unit.carType,
    owner: owner?.code ?? null,
    lengthDm: unit.lengthDm,
    axles: unit.axles,
    tags: tags.map((tag) => ({
      value: Buffer.from(tag.value).toString('utf8'),
      side: tag.side as RegisteredView['tags'][number]['side'],
      validFrom: tag.validFrom?.toISOString() ?? null,
      validTo: tag.validTo?.toISOString() ?? null,
    })),
    formerly: formerly.map(({ compact, display, validFrom, validTo }) => ({
      unitId: compact,
      display,
      validFrom: validFrom?.toISOString() ?? null,
      validTo: validTo?.toISOString() ?? null,
    })),
  };
}
