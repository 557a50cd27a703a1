import type { Map as LeafletMap } from 'leaflet';

interface Props {
  map: LeafletMap;
  width: number;
  height: number;
}

const spacings = [0.25, 0.5, 1, 2, 5, 10];
const labelsApart = 90;
const tick = 6;

/** The frame of the sheet: ticks along its edges at whole degrees, with their latitude and longitude. */
export function Neatline({ map, width, height }: Props) {
  const bounds = map.getBounds();
  const pixelsADegree = width / Math.max(0.001, bounds.getEast() - bounds.getWest());
  const step = spacings.find((degrees) => degrees * pixelsADegree >= labelsApart / 2) ?? 20;
  const meridians = multiples(bounds.getWest(), bounds.getEast(), step);
  const parallels = multiples(bounds.getSouth(), bounds.getNorth(), step);
  const x = (longitude: number) =>
    map.latLngToContainerPoint([bounds.getCenter().lat, longitude]).x;
  const y = (latitude: number) => map.latLngToContainerPoint([latitude, bounds.getCenter().lng]).y;
  return (
    <svg width={width} height={height} aria-hidden="true" className="map-neatline">
      <path
        d={[
          ...meridians.map((m) => `M${x(m)} 0v${tick}M${x(m)} ${height}v-${tick}`),
          ...parallels.map((p) => `M0 ${y(p)}h${tick}M${width} ${y(p)}h-${tick}`),
        ].join('')}
      />
      {meridians.filter(everySecond(step)).map((m) =>
        x(m) > 40 && x(m) < width - 30 ? (
          <text key={m} x={x(m) + 3} y="16">
            {sayDegrees(m, 'E', 'W')}
          </text>
        ) : null,
      )}
      {parallels.filter(everySecond(step)).map((p) =>
        y(p) > 24 && y(p) < height - 10 ? (
          <text key={p} x={tick + 3} y={y(p) + 4}>
            {sayDegrees(p, 'N', 'S')}
          </text>
        ) : null,
      )}
    </svg>
  );
}

const everySecond = (step: number) => (degrees: number) => Math.round(degrees / step) % 2 === 0;

function multiples(from: number, to: number, step: number): number[] {
  const first = Math.ceil(from / step);
  const count = Math.max(0, Math.floor(to / step) - first + 1);
  return Array.from({ length: Math.min(count, 60) }, (_, index) => (first + index) * step);
}

const sayDegrees = (value: number, positive: string, negative: string): string =>
  `${Math.abs(value)}° ${value < 0 ? negative : positive}`;
