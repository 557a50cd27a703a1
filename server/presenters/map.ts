import type { EdgeFeature, SiteFeature } from '../contract/map.js';
import { unseenLeads } from './leads.js';

export interface SiteRecord {
  code: string;
  name: string;
  kind: string;
  latitude: number;
  longitude: number;
  leads: string;
}

export interface CountRecord {
  on_hand: number;
  en_route: number;
  quiet: number;
  past_limit: number;
}

/** A site; `counts` null where the person sees nothing of it. Coordinates: longitude first. */
export function presentSiteFeature(site: SiteRecord, counts: CountRecord | null): SiteFeature {
  return {
    type: 'Feature',
    id: `site-${site.code}`,
    geometry: { type: 'Point', coordinates: [site.longitude, site.latitude] },
    properties: {
      feature: 'site',
      code: site.code,
      name: site.name,
      kind: site.kind as SiteFeature['properties']['kind'],
      onHand: counts && counts.on_hand,
      enRoute: counts && counts.en_route,
      quiet: counts && counts.quiet,
      pastLimit: counts && counts.past_limit,
      unseenLeads: unseenLeads(site.leads),
    },
  };
}

export interface EdgeRecord {
  id: number;
  line: string;
  kind: string;
  rail_metres: number;
  from_code: string;
  from_name: string;
  from_latitude: number;
  from_longitude: number;
  to_code: string;
  to_name: string;
  to_latitude: number;
  to_longitude: number;
}

/** A stretch of the route graph as a straight line between its ends. */
export function presentEdgeFeature(edge: EdgeRecord): EdgeFeature {
  return {
    type: 'Feature',
    id: `edge-${edge.id}`,
    geometry: {
      type: 'LineString',
      coordinates: [
        [edge.from_longitude, edge.from_latitude],
        [edge.to_longitude, edge.to_latitude],
      ],
    },
    properties: {
      feature: 'edge',
      from: { code: edge.from_code, name: edge.from_name },
      to: { code: edge.to_code, name: edge.to_name },
      line: edge.line,
      kind: edge.kind as EdgeFeature['properties']['kind'],
      railMetres: edge.rail_metres,
    },
  };
}
