/** A site as the map draws it; counts are null where the person sees nothing of the site. */
export interface MapSite {
  code: string;
  name: string;
  kind: string;
  latitude: number;
  longitude: number;
  onHand: number | null;
  quiet: number | null;
  pastLimit: number | null;
}

/** A stretch of the route graph; `points` are [longitude, latitude]. */
export interface MapRoute {
  id: string;
  points: [number, number][];
  railMetres: number;
  kind: 'rail' | 'water';
}

/** West, south, east, north in degrees. */
export type Box = [west: number, south: number, east: number, north: number];

/** The box around all sites, or null without any. */
export function boxAround(sites: MapSite[]): Box | null {
  if (sites.length === 0) return null;
  const longitudes = sites.map(({ longitude }) => longitude);
  const latitudes = sites.map(({ latitude }) => latitude);
  return [
    Math.min(...longitudes),
    Math.min(...latitudes),
    Math.max(...longitudes),
    Math.max(...latitudes),
  ];
}

/** The box as Leaflet wants it: south-west and north-east corners, latitude first. */
export const boundsOf = ([w, s, e, n]: Box): [[number, number], [number, number]] => [
  [s, w],
  [n, e],
];
