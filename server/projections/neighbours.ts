import type { PoolConnection } from 'mariadb';
import type { Network } from '../domain/movements/configuration.js';
import { compareText } from '../domain/movements/evidence.js';
import { inParts } from '../lib/bulk.js';
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

const ASKED_A_STATEMENT = 100;
/** One is the passage itself; more than a few in one millisecond there cannot be. */
const NEAREST = 8;
const COLUMNS = `read_point_id, unit_id, first_at, first_antenna, first_tag, last_at, role, direction,
  direction_basis, pass_started_at, pass_ordinal`;

/** The passages next to each one asked for, in the total order of its unit's passages. */
export async function neighboursOf(
  connection: PoolConnection,
  network: Network,
  asked: readonly Placed[],
): Promise<Neighbours[]> {
  const found: Neighbours[] = [];
  for (const part of inParts(asked, ASKED_A_STATEMENT)) {
    const rows = await connection.query<(NeighbourRow & { asked: number })[]>(
      part
        .map(
          (_, index) => `${nearest(index, '<=', 'DESC')} UNION ALL ${nearest(index, '>=', 'ASC')}`,
        )
        .join(' UNION ALL '),
      part.flatMap((row) => [row.unit_id, row.first_at, row.unit_id, row.first_at]),
    );
    const perAsked = part.map((): NeighbourRow[] => []);
    for (const { asked: index, ...row } of rows) perAsked[index]?.push(row);
    part.forEach((row, index) => found.push(nextTo(network, row, perAsked[index] ?? [])));
  }
  return found;
}

function nearest(index: number, than: '<=' | '>=', way: 'ASC' | 'DESC'): string {
  return `(SELECT ${index} AS asked, ${COLUMNS} FROM passages FORCE INDEX (passages_unit)
    WHERE unit_id = ? AND first_at ${than} ? AND stray IS NULL
    ORDER BY unit_id ${way}, first_at ${way}, read_point_id ${way} LIMIT ${NEAREST})`;
}

function nextTo(network: Network, row: Placed, rows: readonly NeighbourRow[]): Neighbours {
  const ordered = [...rows].sort((a, b) => comparePlaced(network, a, b));
  return {
    before: ordered.findLast((other) => comparePlaced(network, other, row) < 0) ?? null,
    after: ordered.find((other) => comparePlaced(network, other, row) > 0) ?? null,
  };
}

/** The total order of a unit's passages: time, site code, antenna number, tag. */
export function comparePlaced(network: Network, a: Placed, b: Placed): number {
  const siteCode = (row: Placed) => network.site(network.readPoint(row.read_point_id).siteId).code;
  return (
    a.first_at.getTime() - b.first_at.getTime() ||
    compareText(siteCode(a), siteCode(b)) ||
    a.first_antenna - b.first_antenna ||
    compareText(a.first_tag.toString(), b.first_tag.toString())
  );
}
