const widest = 24;
const usual = 1.84;
const smallest = 5;
const usualWidth = 640;

/**
 * Radius in pixels of a ring whose area stands for the count; the largest site never swallows the
 * map, and on a small sheet (`width` in pixels) all rings are smaller alike.
 */
export function ringRadius(count: number, most: number, width: number): number {
  const shrink = Math.min(1, Math.max(0.6, Math.sqrt(width / usualWidth)));
  const scale = Math.min(usual, widest / Math.sqrt(Math.max(1, most))) * shrink;
  return Math.max(smallest, Math.sqrt(count) * scale);
}
