const widest = 24;
const usual = 1.84;
const smallest = 5;

/** Radius in pixels of a ring whose area stands for the count; the largest site never swallows the map. */
export function ringRadius(count: number, most: number): number {
  const scale = Math.min(usual, widest / Math.sqrt(Math.max(1, most)));
  return Math.max(smallest, Math.sqrt(count) * scale);
}
