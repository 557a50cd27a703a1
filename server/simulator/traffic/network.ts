import { edges } from '../world/routes.js';
import { OUTSIDE, readPoints, type DemoReadPoint } from '../world/read-points.js';
import { sites, type DemoSite } from '../world/sites.js';
import type { Direction } from './pass.js';

const siteByCode = new Map(sites.map((site) => [site.code, site]));
const metresBetween = new Map(
  edges.flatMap(({ from, to, railMetres }) => [
    [`${from} ${to}`, railMetres] as const,
    [`${to} ${from}`, railMetres] as const,
  ]),
);

/** Rail metres from a place outside of the region to its edge. */
const OUTSIDE_M = 40_000;

/** The site of this code, or null for a junction and the world outside. */
export function siteAt(node: string): DemoSite | null {
  return siteByCode.get(node) ?? null;
}

/** Rail metres of the edge between two neighbours. Throws when there is none. */
export function railMetres(from: string, to: string): number {
  if (from === OUTSIDE || to === OUTSIDE) return OUTSIDE_M;
  const metres = metresBetween.get(`${from} ${to}`);
  if (metres === undefined) throw new Error(`No rails from ${from} to ${to}.`);
  return metres;
}

/** The lead of `site` by which trains to and from its neighbour run. */
export function leadOf(site: string, neighbour: string): DemoReadPoint {
  const lead = readPoints.find((point) => point.site === site && point.toward.includes(neighbour));
  if (!lead) throw new Error(`${site} has no lead toward ${neighbour}.`);
  return lead;
}

/** The leads of a site. */
export function leadsOf(site: string): DemoReadPoint[] {
  return readPoints.filter((point) => point.site === site && point.kind === 'line');
}

/** The read point of a site that stands at a spot, with one place. */
export function spotOf(site: string): DemoReadPoint {
  const spot = readPoints.find((point) => point.site === site && point.kind === 'spot');
  if (!spot) throw new Error(`${site} has no spot with a reader.`);
  return spot;
}

/** The one read point of a line site. */
export function linePointOf(site: string): DemoReadPoint {
  const [point] = leadsOf(site);
  if (!point) throw new Error(`${site} has no read point.`);
  return point;
}

/** The way of travel over a lead that leads into its site. */
export function inwardOf(lead: DemoReadPoint): Direction {
  return lead.increasingPlace === lead.site ? 'increasing' : 'decreasing';
}

/** The way of travel over a line point for a train that comes from `neighbour`. */
export function directionFrom(point: DemoReadPoint, neighbour: string): Direction {
  return point.toward.includes(neighbour) ? 'increasing' : 'decreasing';
}

export function opposite(direction: Direction): Direction {
  return direction === 'increasing' ? 'decreasing' : 'increasing';
}
