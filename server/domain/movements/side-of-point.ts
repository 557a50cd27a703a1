import { siteOfPlace, type Direction, type Network } from './configuration.js';

/**
 * On which side of a read point a site lies: the one from which the way there is shorter with the
 * read point itself cut out of the route graph. Null where nothing tells.
 */
export function sideOfPoint(
  network: Network,
  readPointId: number,
  siteId: number,
): Direction | null {
  const point = network.readPoint(readPointId);
  const decreasing = siteOfPlace(point.decreasingPlace);
  const increasing = siteOfPlace(point.increasingPlace);
  if (decreasing === increasing && decreasing !== null) return null;
  if (siteId === decreasing) return 'decreasing';
  if (siteId === increasing) return 'increasing';
  if (siteId === point.siteId) return null;
  const { routes } = network;
  const nodesOf = (place: number | null, line: readonly number[]) =>
    place === null ? line : [routes.nodeOf(place) ?? NOWHERE];
  const down = nodesOf(decreasing, point.decreasingNodes);
  const up = nodesOf(increasing, point.increasingNodes);
  const target = routes.nodeOf(siteId);
  if (down.length && up.length && target !== undefined) {
    const isOpenLine = decreasing === null && increasing === null;
    const cut = isOpenLine
      ? { a: [routes.nodeOf(point.siteId) ?? NOWHERE], b: [...down, ...up] }
      : { a: down, b: up };
    const metres = (starts: readonly number[]) =>
      Math.min(...starts.map((start) => routes.metresAvoiding(start, target, cut) ?? Infinity));
    const [below, above] = [metres(down), metres(up)];
    if (below !== above) return below < above ? 'decreasing' : 'increasing';
  }
  // Of a lead nothing more need be known: whatever is not its site lies out on the line.
  if ((decreasing === null) === (increasing === null)) return null;
  return decreasing === null ? 'decreasing' : 'increasing';
}

const NOWHERE = -1;
