/** One observation: `x` and `y` in any units. */
export interface Point {
  x: number;
  y: number;
}

/** Slopes of all pairs of points with different `x`. */
function pairSlopes(points: readonly Point[]): number[] {
  const slopes: number[] = [];
  points.forEach((a, index) => {
    for (const b of points.slice(index + 1)) {
      if (a.x !== b.x) slopes.push((b.y - a.y) / (b.x - a.x));
    }
  });
  return slopes;
}

/** Middle value; the mean of the two middle ones for an even count; null of nothing. */
export function median(values: readonly number[]): number | null {
  if (values.length === 0) return null;
  const sorted = [...values].sort((a, b) => a - b);
  const half = sorted.length >> 1;
  const upper = sorted[half] as number;
  return sorted.length % 2 ? upper : ((sorted[half - 1] as number) + upper) / 2;
}

/**
 * Theil-Sen slope: the median of the slopes of all pairs (Theil 1950, Sen 1968). Of several groups
 * of points only pairs within a group count. Null when no two points of a group differ in `x`.
 */
export function theilSenSlope(...groups: readonly (readonly Point[])[]): number | null {
  return median(groups.flatMap(pairSlopes));
}
