import { OUTSIDE, type DemoReadPoint } from './read-points.js';
import { edges } from './routes.js';

/** Nodes next on the open line on either side of a read point, as the read point is set up. */
export function towardOf(point: DemoReadPoint): { decreasing: string[]; increasing: string[] } {
  if (point.kind === 'spot') return { decreasing: [], increasing: [] };
  const toward = point.toward.filter((node) => node !== OUTSIDE);
  if (point.decreasingPlace !== null) return { decreasing: [], increasing: toward };
  if (point.increasingPlace !== null) return { decreasing: toward, increasing: [] };
  const neighbours = edges.flatMap(({ from, to }) =>
    from === point.site ? [to] : to === point.site ? [from] : [],
  );
  const rest = neighbours.filter((node) => !toward.includes(node));
  return { decreasing: toward, increasing: rest };
}
