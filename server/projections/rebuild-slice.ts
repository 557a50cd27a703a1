import type { Pool, PoolConnection } from 'mariadb';
import type { Network, ReadPointConfiguration } from '../domain/movements/configuration.js';
import { visitsOf } from '../domain/movements/visits.js';
import type { UsableRead } from '../domain/movements/evidence.js';
import { Changes } from './changes.js';
import { foldPoints } from './fold-points.js';
import type { Usable } from './fold-reads.js';
import { withReleases, type ReadRow, type StoredRead } from './load-reads.js';
import type { PassRow } from './passage-rows.js';
import { PointLedger } from './point-ledger.js';

/** A stretch of one read point whose history is made anew from the ledger; [from, to), ms. */
export interface Slice {
  from: number;
  to: number;
  reads: StoredRead[];
}

/** How many reads a slice holds, about: what comes in meanwhile waits that long. */
export const SLICE_READS = 1_000;

/**
 * The reads of a slice of a read point from `from` (ms) on: about SLICE_READS, to `until` at the
 * most, but always from one quiet moment to another, so that no visit is cut.
 */
export async function loadSlice(
  pool: Pool,
  network: Network,
  point: ReadPointConfiguration,
  { from, until, frozen }: { from: number; until: number; frozen: number },
): Promise<Slice> {
  const ledger = new PointLedger(pool, network, point);
  const quiet = await ledger.quietBefore(from);
  // Reads from before then are gone: what they began stays as it is.
  const start = quiet < frozen ? await ledger.quietAfter(frozen) : quiet;
  const some = await ledger.reads(start, until, SLICE_READS);
  const full = some.length === SLICE_READS;
  const reached = full ? (some.at(-1) as ReadRow).read_at.getTime() + 1 : until;
  const to = await ledger.quietAfter(Math.max(reached, start));
  return { from: start, to, reads: await withReleases(pool, await ledger.reads(start, to)) };
}

/** Makes the history of a slice anew, and everything that it bears on. Answers what changed. */
export async function foldSlice(
  connection: PoolConnection,
  network: Network,
  point: ReadPointConfiguration,
  { from, to }: Slice,
  usable: readonly Usable[],
): Promise<Changes> {
  const changes = new Changes();
  const stretch = [point.id, new Date(from), new Date(to)] as const;
  const stored = await connection.query<{ unit_id: number }[]>(
    `SELECT DISTINCT unit_id FROM passages
     WHERE read_point_id = ? AND first_at >= ? AND first_at < ?`,
    stretch,
  );
  await voteAgain(connection, stretch, changes);
  const byUnit = new Map<number, UsableRead[]>();
  for (const { readPointId, unit, read } of usable) {
    if (readPointId !== point.id) continue;
    const own = byUnit.get(unit);
    if (own) own.push(read);
    else byUnit.set(unit, [read]);
  }
  const gapMs = point.visitGapSeconds * 1000;
  const facts = {
    visits: [...byUnit].flatMap(([unit, reads]) => visitsOf(unit, reads, gapMs)),
    unitIds: new Set([...stored.map((row) => row.unit_id), ...byUnit.keys()]),
    since: from,
    until: to,
    sensed: false,
    instead: { from, to },
  };
  await foldPoints(connection, network, new Map([[point.id, [facts]]]), changes);
  return changes;
}

/**
 * What was read may be what it was, and yet history tell of it otherwise: lines, leads or the route
 * graph may have changed.
 */
async function voteAgain(
  connection: PoolConnection,
  stretch: readonly [readPointId: number, from: Date, to: Date],
  changes: Changes,
): Promise<void> {
  const passes = await connection.query<
    Pick<PassRow, 'read_point_id' | 'started_at' | 'ordinal'>[]
  >(
    `SELECT read_point_id, started_at, ordinal FROM passes
     WHERE read_point_id = ? AND started_at >= ? AND started_at < ?
       AND (direction_basis IS NULL OR direction_basis = 'history')`,
    stretch,
  );
  for (const { read_point_id: readPointId, started_at: startedAt, ordinal } of passes) {
    changes.vote({ readPointId, startedAt: startedAt.getTime(), ordinal });
  }
}
