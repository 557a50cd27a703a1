import type { MapSite } from './map-types';

const lineHeight = 16;
const countFits = 8;
const font = '500 14px "IBM Plex Sans Condensed"';
let pen: CanvasRenderingContext2D | null | undefined;

/** The words beside a ring: its name, its count where the ring is too small to hold it, what wants attention. */
export function labelWords(site: MapSite, radius: number) {
  const count = site.onHand ?? 0;
  const isInside = radius >= countFits;
  const attention = [
    site.pastLimit ? `${site.pastLimit} past limit` : '',
    site.quiet ? `${site.quiet} quiet` : '',
  ].filter(Boolean);
  return {
    name: site.name,
    inside: isInside ? String(count) : '',
    after: !isInside && count > 0 ? String(count) : '',
    attention: attention.join(', '),
  };
}

/** The size of those words in pixels. */
export function measureLabel(site: MapSite, radius: number): { width: number; height: number } {
  const words = labelWords(site, radius);
  pen ??= document.createElement('canvas').getContext('2d');
  if (!pen) return { width: site.name.length * 7, height: lineHeight };
  pen.font = font;
  const first = pen.measureText(`${words.name} ${words.after}`).width;
  const second = pen.measureText(words.attention).width;
  return {
    width: Math.ceil(Math.max(first, second)) + 4,
    height: words.attention ? lineHeight * 2 : lineHeight,
  };
}
