import type { PoolConnection } from 'mariadb';
import type { Network } from '../domain/movements/configuration.js';
import { compareText } from '../domain/movements/evidence.js';
import { byKeys, inParts } from '../lib/bulk.js';
import type { PassageRow } from './passage-rows.js';

/** What gives a passage its place among those of its unit. */
export type Placed = Pick<
  PassageRow,
  'read_point_id' | 'unit_id' | 'first_at' | 'first_antenna' | 'first_tag'
>;

/** A passage next to another one of the same unit, strays left out. */
export type NeighbourRow = Placed &
  Pick<
    PassageRow,
    'last_at' | 'role' | 'direction' | 'direction_basis' | 'pass_started_at' | 'pass_ordinal'
  >;

export interface Neighbours {
  before: NeighbourRow | null;
  after: NeighbourRow | null;
}

const COLUMNS = `read_point_id, unit_id, first_at, first_antenna, first_tag, last_at, role, direction,
  direction_basis, pass_started_at, pass_ordinal`;

/** Most passages have their neighbours within this; the others are asked for one by one. */
const NEAR_MS = 48 * 3_600_000;

/** The passages next to each one asked for, in the total order of its unit's passages. */
export async function neighboursOf(
  connection: PoolConnection,
  network: Network,
  asked: readonly Placed[],
): Promise<Neighbours[]> {
  if (asked.length === 0) return [];
  const units = await loadUnits(connection, asked);
  const found = asked.map((row) => nextTo(network, row, units.get(row.unit_id)?.rows ?? []));
  const missing = asked.flatMap((row, index) => {
    const { before, after } = found[index] as Neighbours;
    const unit = units.get(row.unit_id);
    const isEarlier = !before && unit !== undefined && unit.earliest < unit.from;
    const isLater = !after && unit !== undefined && unit.latest > unit.to;
    return [
      ...(isEarlier ? [{ index, row, side: 'before' as const }] : []),
      ...(isLater ? [{ index, row, side: 'after' as const }] : []),
    ];
  });
  for (const part of inParts(missing, ASKED_A_STATEMENT)) {
    const far = await loadFar(connection, part);
    part.forEach(({ index, row, side }, at) => {
      const own = found[index] as Neighbours;
      own[side] = nextTo(network, row, far[at] ?? [])[side];
    });
  }
  return found;
}

/** A unit's passages about those asked for ([from, to], ms), and how far all of them reach. */
interface UnitRows {
  from: number;
  to: number;
  rows: NeighbourRow[];
  earliest: number;
  latest: number;
}

async function loadUnits(
  connection: PoolConnection,
  asked: readonly Placed[],
): Promise<Map<number, UnitRows>> {
  const units = new Map<number, UnitRows>();
  for (const { unit_id: unitId, first_at: firstAt } of asked) {
    const [from, to] = [firstAt.getTime() - NEAR_MS, firstAt.getTime() + NEAR_MS];
    const known = units.get(unitId);
    if (!known) units.set(unitId, { from, to, rows: [], earliest: Infinity, latest: -Infinity });
    else Object.assign(known, { from: Math.min(known.from, from), to: Math.max(known.to, to) });
  }
  const extents = await connection.query<{ unit_id: number; earliest: Date; latest: Date }[]>(
    `SELECT unit_id, MIN(first_at) AS earliest, MAX(first_at) AS latest
     FROM passages FORCE INDEX (passages_unit) WHERE unit_id IN (?) GROUP BY unit_id`,
    [[...units.keys()]],
  );
  for (const { unit_id: unitId, earliest, latest } of extents) {
    Object.assign(units.get(unitId) as UnitRows, {
      earliest: earliest.getTime(),
      latest: latest.getTime(),
    });
  }
  const rows = await byKeys<NeighbourRow>(
    connection,
    `SELECT ${COLUMNS} FROM passages FORCE INDEX (passages_unit) WHERE stray IS NULL AND (:keys)`,
    'unit_id = ? AND first_at >= ? AND first_at <= ?',
    [...units].map(([unitId, { from, to }]) => [unitId, new Date(from), new Date(to)]),
  );
  for (const row of rows) units.get(row.unit_id)?.rows.push(row);
  return units;
}

const ASKED_A_STATEMENT = 200;
/** More there cannot be in one millisecond: a read point has a unit once. */
const MANY = 64;

/** The passages of the nearest instant on one side of each one asked for, and its own. */
async function loadFar(
  connection: PoolConnection,
  asked: readonly { row: Placed; side: 'before' | 'after' }[],
): Promise<NeighbourRow[][]> {
  const far = asked.map((): NeighbourRow[] => []);
  const rows = await connection.query<(NeighbourRow & { asked: number })[]>(
    asked.map(({ side }, index) => nearest(index, side)).join(' UNION ALL '),
    asked.flatMap(({ row }) => [row.unit_id, row.unit_id, row.first_at]),
  );
  for (const row of rows) far[row.asked]?.push(row);
  return far;
}

function nearest(index: number, side: 'before' | 'after'): string {
  const [than, edge] = side === 'after' ? ['>', 'MIN'] : ['<', 'MAX'];
  return `(SELECT ${index} AS asked, ${COLUMNS} FROM passages FORCE INDEX (passages_unit)
    WHERE unit_id = ? AND stray IS NULL AND first_at =
      (SELECT ${edge}(first_at) FROM passages FORCE INDEX (passages_unit)
       WHERE unit_id = ? AND stray IS NULL AND first_at ${than} ?) LIMIT ${MANY})`;
}

function nextTo(network: Network, row: Placed, rows: readonly NeighbourRow[]): Neighbours {
  let before: NeighbourRow | null = null;
  let after: NeighbourRow | null = null;
  for (const other of rows) {
    const place = comparePlaced(network, other, row);
    if (place < 0 && (!before || comparePlaced(network, other, before) > 0)) before = other;
    if (place > 0 && (!after || comparePlaced(network, other, after) < 0)) after = other;
  }
  return { before, after };
}

/** The total order of a unit's passages: time, site code, antenna number, tag. */
export function comparePlaced(network: Network, a: Placed, b: Placed): number {
  const difference = a.first_at.getTime() - b.first_at.getTime();
  if (difference !== 0) return difference;
  const siteCode = (row: Placed) => network.site(network.readPoint(row.read_point_id).siteId).code;
  return (
    compareText(siteCode(a), siteCode(b)) ||
    a.first_antenna - b.first_antenna ||
    compareText(a.first_tag.toString(), b.first_tag.toString())
  );
}
