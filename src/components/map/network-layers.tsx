import { useEffect, useMemo, useRef, useState } from 'react';
import { useMap, useMapEvents } from 'react-leaflet';
import type { Map as LeafletMap } from 'leaflet';
import type { MapRoute, MapSite } from './map-types';
import { Neatline } from './neatline';
import { RouteLines, drawnRoutes } from './route-lines';
import { ScaleBar } from './scale-bar';
import { SiteRings } from './site-rings';

interface Props {
  sites: MapSite[];
  routes: MapRoute[];
  chosen: string | undefined;
  onChoose: (code: string) => void;
  unit: 'miles' | 'kilometres';
  /** Called when the frame has another size and nobody has moved the map yet. */
  onResize: () => void;
}

/** What stands on the sheet, drawn again whenever the sheet moves. */
export function NetworkLayers({ sites, routes, chosen, onChoose, unit, onResize }: Props) {
  const map = useMap();
  const view = useView(map, onResize);
  const drawn = useMemo(() => {
    const middle: [number, number] = [
      sites.reduce((sum, site) => sum + site.longitude, 0) / Math.max(1, sites.length),
      sites.reduce((sum, site) => sum + site.latitude, 0) / Math.max(1, sites.length),
    ];
    return drawnRoutes(routes, middle);
  }, [routes, sites]);
  return (
    <>
      <RouteLines routes={drawn} map={map} zoom={view.zoom} />
      <SiteRings
        map={map}
        zoom={view.zoom}
        sites={sites}
        routes={drawn}
        chosen={chosen}
        onChoose={onChoose}
      />
      <Neatline key={view.turn} map={map} width={view.width} height={view.height} />
      <ScaleBar key={`scale-${view.turn}`} map={map} unit={unit} />
    </>
  );
}

interface View {
  zoom: number;
  width: number;
  height: number;
  /** Grows with each move, so that what is reckoned from the map is reckoned anew. */
  turn: number;
}

function useView(map: LeafletMap, onResize: () => void): View {
  const [view, setView] = useState<View>(() => readView(map, 0));
  const wasMoved = useRef(false);
  const resized = useRef(onResize);
  useEffect(() => {
    resized.current = onResize;
  }, [onResize]);
  useMapEvents({
    move: () => setView(({ turn }) => readView(map, turn + 1)),
    zoomend: () => setView(({ turn }) => readView(map, turn + 1)),
    dragstart: () => {
      wasMoved.current = true;
    },
  });
  useEffect(() => {
    const frame = map.getContainer();
    frame.setAttribute('role', 'region');
    frame.setAttribute('aria-label', 'Map; arrow keys move it, plus and minus change its scale');
    const observer = new ResizeObserver(() => {
      map.invalidateSize({ animate: false });
      if (!wasMoved.current) resized.current();
      setView(({ turn }) => readView(map, turn + 1));
    });
    observer.observe(frame);
    return () => observer.disconnect();
  }, [map]);
  return view;
}

function readView(map: LeafletMap, turn: number): View {
  const { x: width, y: height } = map.getSize();
  return { zoom: map.getZoom(), width, height, turn };
}
