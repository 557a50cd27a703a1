import type { MultiPolygon, Polygon, Position } from 'geojson';
import type { GeometryCollection, Topology } from 'topojson-specification';

/** What lies under the network: land to fill, shores, and the borders of countries and states. */
export interface Outline {
  /** Polygons, each with its outer ring first. */
  land: Position[][][];
  shores: Position[][];
  borders: Position[][];
}

type Atlas = Topology<Record<string, GeometryCollection>>;

const america = '840';
/** How near an outer line of the states must lie to the neighbour's border to be one, in degrees. */
const borderWithin = 0.16;

/**
 * The outlines within `box`, from the public-domain atlases (US Census cartographic boundaries,
 * Natural Earth). The world atlas counts the Great Lakes as land, so shores are the states' alone.
 */
export async function loadOutline(box: [number, number, number, number]): Promise<Outline> {
  const [{ feature, mesh }, statesModule, worldModule] = await Promise.all([
    import('topojson-client'),
    import('us-atlas/states-10m.json'),
    import('world-atlas/countries-110m.json'),
  ]);
  const states = statesModule.default as unknown as Atlas;
  const world = worldModule.default as unknown as Atlas;
  const { countries } = world.objects;
  const { nation, states: members } = states.objects;
  if (!countries || !nation || !members) throw new Error('An atlas lacks its layers.');
  const foreign = mesh(world, countries, (a, b) => a !== b).coordinates;
  const american = mesh(
    world,
    countries,
    (a, b) => a !== b && (a.id === america || b.id === america),
  ).coordinates;
  const outer = clip(mesh(states, nation).coordinates, box);
  const { shores, onLand } = splitOuter(outer, clip(american, widen(box, 3)).flatMap(densify));
  const coasts = clip(
    mesh(world, countries, (a, b) => a === b && a.id !== america).coordinates,
    box,
  );
  return {
    land: feature(states, nation).features.flatMap(({ geometry }) => polygonsOf(geometry)),
    shores: [...shores, ...coasts],
    borders: [
      ...clip(mesh(states, members, (a, b) => a !== b).coordinates, box),
      ...onLand,
      ...(outer.length === 0 ? clip(foreign, box) : []),
    ],
  };
}

const polygonsOf = (geometry: { type: string }): Position[][][] => {
  if (geometry.type === 'Polygon') return [(geometry as Polygon).coordinates];
  return geometry.type === 'MultiPolygon' ? (geometry as MultiPolygon).coordinates : [];
};

const widen = ([w, s, e, n]: [number, number, number, number], by: number) =>
  [w - by, s - by, e + by, n + by] as [number, number, number, number];

/** Parts of the lines that lie within the box; each part keeps one point beyond it. */
function clip(lines: Position[][], [w, s, e, n]: [number, number, number, number]): Position[][] {
  const isIn = ([x = 0, y = 0]: Position) => x >= w && x <= e && y >= s && y <= n;
  return lines.flatMap((line) => {
    const parts: Position[][] = [];
    let part: Position[] = [];
    line.forEach((point, index) => {
      const near = [line[index - 1], point, line[index + 1]].some((other) => other && isIn(other));
      if (near) part.push(point);
      else if (part.length > 0) {
        parts.push(part);
        part = [];
      }
    });
    if (part.length > 0) parts.push(part);
    return parts.filter(({ length }) => length > 1);
  });
}

/** Points at most a tenth of a degree apart along a coarse line. */
function densify(line: Position[]): Position[] {
  return line.flatMap((to, index) => {
    const from = line[index - 1];
    if (!from) return [to];
    const [x = 0, y = 0] = from;
    const [toX = 0, toY = 0] = to;
    const steps = Math.max(1, Math.ceil(Math.hypot(toX - x, toY - y) / 0.1));
    return Array.from({ length: steps }, (_, step) => {
      const share = (step + 1) / steps;
      return [x + (toX - x) * share, y + (toY - y) * share];
    });
  });
}

/** Parts the outer line of the states into shores and what borders a neighbour on land. */
function splitOuter(outer: Position[][], neighbour: Position[]) {
  const isBorder = ([x = 0, y = 0]: Position) =>
    neighbour.some(([nx = 0, ny = 0]) => Math.hypot((nx - x) * 0.7, ny - y) < borderWithin);
  const shores: Position[][] = [];
  const onLand: Position[][] = [];
  for (const line of outer) {
    const [first, last] = [line[0], line.at(-1)];
    const isIsland = line.length < 400 && first?.[0] === last?.[0] && first?.[1] === last?.[1];
    let kind: boolean | null = null;
    let part: Position[] = [];
    for (const point of line) {
      const now = !isIsland && isBorder(point);
      part.push(point);
      if (kind !== null && now !== kind) {
        (kind ? onLand : shores).push(part);
        part = [point];
      }
      kind = now;
    }
    (kind ? onLand : shores).push(part);
  }
  return { shores, onLand };
}
