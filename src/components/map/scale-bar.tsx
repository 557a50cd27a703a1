import type { Map as LeafletMap } from 'leaflet';

interface Props {
  map: LeafletMap;
  unit: 'miles' | 'kilometres';
}

const longest = 190;
const rounds = [500, 200, 100, 50, 20, 10, 5, 2, 1];

/** A measure of the sheet at its middle latitude, in ten parts. */
export function ScaleBar({ map, unit }: Props) {
  const middle = map.getSize().divideBy(2);
  const across = map.distance(
    map.containerPointToLatLng(middle.subtract([50, 0])),
    map.containerPointToLatLng(middle.add([50, 0])),
  );
  const unitsAPixel = across / 100 / (unit === 'miles' ? 1609.344 : 1000);
  const length = rounds.find((round) => round / unitsAPixel <= longest) ?? 1;
  const width = length / unitsAPixel;
  if (!Number.isFinite(width) || width <= 0) return null;
  const ticks = Array.from({ length: 11 }, (_, index) => `M${1 + (index * width) / 10} 4v6`);
  return (
    <p className="map-scale">
      {length} {unit} as the crow flies; a tick on the line every 10 rail miles
      <svg width={width + 2} height="14" aria-hidden="true">
        <path d={`M1 7h${width}${ticks.join('')}`} />
      </svg>
    </p>
  );
}
