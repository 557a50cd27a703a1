import L from 'leaflet';
import type { LabelPlace } from './label-places';
import type { MapSite } from './map-types';
import { labelWords } from './measure-label';

const smallestTarget = 24;

function span(className: string, text = ''): HTMLSpanElement {
  const element = document.createElement('span');
  element.className = className;
  element.textContent = text;
  return element;
}

/** The ring and its words (only heard without a place) as a Leaflet icon, sized through the style object so that no inline style is parsed. */
export function drawRing(
  site: MapSite,
  radius: number,
  place: LabelPlace | null,
  isChosen: boolean,
): L.DivIcon {
  const words = labelWords(site, radius);
  const frame = span('map-site-frame');
  const isPoint = site.kind === 'line';
  const ring = span(isPoint ? 'map-point' : 'map-ring', isPoint ? '' : words.inside);
  const size = isPoint ? 8 : radius * 2;
  ring.style.width = `${size}px`;
  ring.style.height = `${size}px`;
  if (isChosen) ring.dataset.chosen = '';
  if (site.onHand === null) frame.dataset.outside = '';
  frame.append(ring, labelOf(words, place));
  const target = Math.max(smallestTarget, size);
  return L.divIcon({ className: 'map-site', html: frame, iconSize: [target, target] });
}

function labelOf(words: ReturnType<typeof labelWords>, place: LabelPlace | null) {
  const label = span(place ? 'map-name' : 'map-name only-heard');
  label.style.left = `${place?.left ?? 0}px`;
  label.style.top = `${place?.top ?? 0}px`;
  label.style.textAlign = place?.align ?? 'left';
  label.append(span('', words.name));
  if (words.after) label.append(span('map-count', ` ${words.after}`));
  label.append(span('only-heard', words.inside || words.after ? ' on hand' : ''));
  if (words.attention) label.append(span('map-attention', words.attention));
  return label;
}
