type Point = [x: number, y: number];

const samples = 32;
const deepest = 0.075;
const metresADegree = 111_195;

/**
 * A stretch that is known only by its ends: the more the rail distance exceeds the straight one, the
 * more it bows away from `middle`, up to a little. Sagitta of a flat arc: length = chord (1 + 8/3 (s/c)^2).
 */
export function bowedLine(points: Point[], railMetres: number, middle: Point): Point[] {
  const [start, end] = points;
  if (points.length !== 2 || !start || !end) return points;
  const squeeze = Math.cos((((start[1] + end[1]) / 2) * Math.PI) / 180);
  const dx = (end[0] - start[0]) * squeeze;
  const dy = end[1] - start[1];
  const chord = Math.hypot(dx, dy) * metresADegree;
  if (chord === 0) return points;
  const excess = Math.max(0, railMetres / chord - 1);
  const bow = Math.min(deepest, Math.sqrt((excess * 3) / 8));
  const outward =
    dy * ((start[0] + end[0]) / 2 - middle[0]) * squeeze -
    dx * ((start[1] + end[1]) / 2 - middle[1]);
  const side = outward >= 0 ? 1 : -1;
  return Array.from({ length: samples + 1 }, (_, index) => {
    const along = index / samples;
    const height = 4 * bow * along * (1 - along) * side;
    return [start[0] + (dx * along + dy * height) / squeeze, start[1] + dy * along - dx * height];
  });
}

/** Short strokes across a line, `count` of them evenly spaced, in the line's own (pixel) units. */
export function crossTicks(line: Point[], count: number, half: number): [Point, Point][] {
  const steps = line.slice(1).map((point, index) => {
    const from = line[index] ?? point;
    return { from, point, length: Math.hypot(point[0] - from[0], point[1] - from[1]) };
  });
  const total = steps.reduce((sum, { length }) => sum + length, 0);
  const ticks: [Point, Point][] = [];
  let passed = 0;
  let next = 1;
  for (const { from, point, length } of steps) {
    while (length > 0 && next < count && (next / count) * total <= passed + length) {
      const share = ((next / count) * total - passed) / length;
      const x = from[0] + (point[0] - from[0]) * share;
      const y = from[1] + (point[1] - from[1]) * share;
      const across: Point = [
        (-(point[1] - from[1]) / length) * half,
        ((point[0] - from[0]) / length) * half,
      ];
      ticks.push([
        [x - across[0], y - across[1]],
        [x + across[0], y + across[1]],
      ]);
      next += 1;
    }
    passed += length;
  }
  return ticks;
}
