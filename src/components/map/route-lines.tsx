import { Polyline } from 'react-leaflet';
import type { LatLngTuple, Map as LeafletMap } from 'leaflet';
import { bowedLine, crossTicks } from './bowed-line';
import type { MapRoute } from './map-types';

const tenMiles = 16_093.44;
const closestTicks = 4;
const halfTick = 3;

/** Lines of the network as drawn: [longitude, latitude] points, bowed where only the ends are known. */
export const drawnRoutes = (routes: MapRoute[], middle: [number, number]) =>
  routes.map((route) => ({ ...route, points: bowedLine(route.points, route.railMetres, middle) }));

const toLatLng = (points: [number, number][]): LatLngTuple[] => points.map(([x, y]) => [y, x]);

interface Props {
  routes: MapRoute[];
  map: LeafletMap;
  /** The zoom that the ticks are reckoned for. */
  zoom: number;
}

/** The route graph; a tick every ten rail miles, water stretches broken. */
export function RouteLines({ routes, map, zoom }: Props) {
  const rail = routes.filter(({ kind }) => kind === 'rail');
  const ticks = rail.flatMap((route) => ticksOf(route, map, zoom));
  return (
    <>
      <Polyline
        positions={rail.map(({ points }) => toLatLng(points))}
        interactive={false}
        className="map-rail"
        smoothFactor={0}
        pathOptions={{ weight: 1.3 }}
      />
      <Polyline
        positions={routes
          .filter(({ kind }) => kind === 'water')
          .map(({ points }) => toLatLng(points))}
        interactive={false}
        className="map-rail"
        smoothFactor={0}
        pathOptions={{ weight: 1.3, dashArray: '2 5' }}
      />
      <Polyline
        key={zoom}
        positions={ticks}
        interactive={false}
        className="map-rail"
        smoothFactor={0}
        pathOptions={{ weight: 1 }}
      />
    </>
  );
}

function ticksOf(route: MapRoute, map: LeafletMap, zoom: number): LatLngTuple[][] {
  const line = route.points.map(([x, y]): [number, number] => {
    const point = map.project([y, x], zoom);
    return [point.x, point.y];
  });
  const count = route.railMetres / tenMiles;
  const [first, last] = [line[0], line.at(-1)];
  if (!first || !last) return [];
  if (Math.hypot(last[0] - first[0], last[1] - first[1]) / count < closestTicks) return [];
  return crossTicks(line, count, halfTick).map((tick) =>
    tick.map((point): LatLngTuple => {
      const { lat, lng } = map.unproject(point, zoom);
      return [lat, lng];
    }),
  );
}
