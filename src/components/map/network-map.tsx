import { useMemo, useState } from 'react';
import { MapContainer } from 'react-leaflet';
import type { Map as LeafletMap } from 'leaflet';
import { useMedia } from '../../lib/use-media';
import { boundsOf, boxAround } from './map-types';
import type { MapRoute, MapSite } from './map-types';
import { NetworkLayers } from './network-layers';
import { OutlineLayers } from './outline-layers';

interface Props {
  sites: MapSite[];
  routes: MapRoute[];
  /** Code of the site that the table is narrowed to. */
  chosen: string | undefined;
  onChoose: (code: string) => void;
  unit: 'miles' | 'kilometres';
}

const padding: [number, number] = [64, 52];

/** The network on its sheet, all of it vector; the words below it move it, the table says the same. */
export function NetworkMap(props: Props) {
  const { sites } = props;
  const [map, setMap] = useState<LeafletMap | null>(null);
  const box = useMemo(() => boxAround(sites), [sites]);
  const isBeside = useMedia('(min-width: 1024px)');
  if (!box) return null;
  const fit = () => map?.fitBounds(boundsOf(box), { padding });
  return (
    <figure className="flex min-h-0 flex-1 flex-col" aria-label="Map of the network">
      <div className="map-frame">
        <MapContainer
          key={String(isBeside)}
          ref={setMap}
          bounds={boundsOf(box)}
          boundsOptions={{ padding }}
          zoomSnap={0.25}
          zoomDelta={0.5}
          zoomControl={false}
          attributionControl={false}
          zoomAnimation={false}
          fadeAnimation={false}
          markerZoomAnimation={false}
          inertia={false}
          scrollWheelZoom={isBeside}
          className="size-full"
        >
          <OutlineLayers box={box} />
          <NetworkLayers {...props} onResize={fit} />
        </MapContainer>
      </div>
      <figcaption className="flex flex-wrap items-center gap-x-24 gap-y-4 pt-8 font-condensed text-table">
        <Legend />
        <span className="ml-auto flex gap-12">
          <MapWord word="Fit" onPress={fit} />
          <MapWord word="Closer" onPress={() => map?.zoomIn(0.5)} />
          <MapWord word="Wider" onPress={() => map?.zoomOut(0.5)} />
        </span>
      </figcaption>
    </figure>
  );
}

function MapWord({ word, onPress }: { word: string; onPress: () => void }) {
  return (
    <button type="button" className="link min-h-24 min-w-24" onClick={onPress}>
      {word}
    </button>
  );
}

function Legend() {
  return (
    <span className="flex items-center gap-8 text-ink-soft">
      <svg width="16" height="16" aria-hidden="true" className="fill-sheet stroke-ink">
        <circle cx="8" cy="8" r="6.5" strokeWidth="1.6" />
      </svg>
      on hand, area is the count
    </span>
  );
}
