import { useEffect, useRef } from 'react';
import L from 'leaflet';
import type { Map as LeafletMap } from 'leaflet';
import { drawRing } from './draw-ring';
import { placeLabels } from './label-places';
import type { LabelPlace } from './label-places';
import type { MapRoute, MapSite } from './map-types';
import { measureLabel } from './measure-label';
import { ringRadius } from './ring-size';

interface Props {
  map: LeafletMap;
  zoom: number;
  sites: MapSite[];
  routes: MapRoute[];
  /** Code of the site that the table is narrowed to. */
  chosen: string | undefined;
  onChoose: (code: string) => void;
}

/** Sites as rings whose area is the count on hand, each a button with its name and what wants attention. */
export function SiteRings({ map, zoom, sites, routes, chosen, onChoose }: Props) {
  const focused = useRef<string | null>(null);
  useEffect(() => {
    const group = L.layerGroup().addTo(map);
    const most = Math.max(1, ...sites.map(({ onHand }) => onHand ?? 0));
    const radii = sites.map((site) => ringRadius(site.onHand ?? 0, most, map.getSize().x));
    const places = placesOf(map, zoom, sites, radii, routes);
    sites.forEach((site, index) => {
      const radius = radii[index] ?? 0;
      const marker = L.marker([site.latitude, site.longitude], {
        icon: drawRing(site, radius, places[index] ?? null, site.code === chosen),
        keyboard: site.onHand !== null,
        interactive: site.onHand !== null,
        riseOnHover: true,
      });
      marker.on('click', () => onChoose(site.code)).addTo(group);
      const element = marker.getElement();
      if (site.onHand !== null) {
        element?.setAttribute('aria-pressed', String(site.code === chosen));
      }
      element?.setAttribute('data-site', site.code);
      element?.addEventListener('keydown', (event) => {
        if (event.key !== 'Enter' && event.key !== ' ') return;
        event.preventDefault();
        onChoose(site.code);
      });
      if (focused.current === site.code) element?.focus({ preventScroll: true });
    });
    return () => {
      // Rings are drawn anew with each count; the one in hand stays in hand.
      const held = document.activeElement?.closest<HTMLElement>('[data-site]');
      focused.current = held?.dataset.site ?? null;
      group.remove();
    };
  }, [map, zoom, sites, routes, chosen, onChoose]);
  return null;
}

function placesOf(
  map: LeafletMap,
  zoom: number,
  sites: MapSite[],
  radii: number[],
  routes: MapRoute[],
): (LabelPlace | null)[] {
  const origin = map.project(map.getBounds().getNorthWest(), zoom);
  const pixel = (longitude: number, latitude: number): [number, number] => {
    const point = map.project([latitude, longitude], zoom).subtract(origin);
    return [point.x, point.y];
  };
  const entries = sites.map((site, index) => {
    const [x, y] = pixel(site.longitude, site.latitude);
    return { x, y, radius: radii[index] ?? 0, ...measureLabel(site, radii[index] ?? 0) };
  });
  const lines = routes.flatMap(({ points }) => points.map(([x, y]) => pixel(x, y)));
  const { x: width, y: height } = map.getSize();
  const scale = { left: 0, top: height - 48, width: 296, height: 48 };
  return placeLabels(entries, lines, { width, height }, [scale]);
}
