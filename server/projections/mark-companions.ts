import type { PoolConnection } from 'mariadb';
import { byKeys } from '../lib/bulk.js';
import type { PassKey } from '../domain/movements/passes.js';
import type { Changes } from './changes.js';
import type { NeighbourRow } from './neighbours.js';

type Member = Pick<NeighbourRow, 'unit_id' | 'first_at' | 'last_at'>;

/**
 * Marks the units whose history rests on who else was in a pass that changed: a departure that
 * nobody saw, or a sighting that no train could join.
 */
export async function markCompanions(connection: PoolConnection, changes: Changes): Promise<void> {
  const passes = [...changes.passes.values()];
  const members = await byKeys<Member>(
    connection,
    'SELECT unit_id, first_at, last_at FROM passages WHERE :keys',
    'read_point_id = ? AND pass_started_at = ? AND pass_ordinal = ?',
    passes.map(({ readPointId, startedAt, ordinal }: PassKey) => [
      readPointId,
      new Date(startedAt),
      ordinal,
    ]),
  );
  const waiting = members.filter((row) => {
    const from = changes.dirty.get(row.unit_id);
    return from === undefined || from > row.first_at.getTime();
  });
  const firstAt = new Map<number, number>();
  for (const row of waiting) {
    const at = row.first_at.getTime();
    firstAt.set(row.unit_id, Math.min(firstAt.get(row.unit_id) ?? Infinity, at));
  }
  const guessed = await byKeys<{ unit_id: number }>(
    connection,
    `SELECT unit_id FROM stays FORCE INDEX (stays_inferred)
     WHERE departure_basis = 'inferred' AND (:keys)`,
    'unit_id = ? AND departure_latest >= ? AND departure_latest <= ?',
    waiting.map((row) => [row.unit_id, row.first_at, row.last_at]),
  );
  for (const { unit_id: unitId } of guessed) changes.unit(unitId, firstAt.get(unitId) ?? 0);
  const doubted = await byKeys<{ unit_id: number; at: Date }>(
    connection,
    'SELECT unit_id, at FROM doubts WHERE :keys',
    'unit_id = ? AND (at = ? OR previous_at = ?)',
    waiting.map((row) => [row.unit_id, row.first_at, row.first_at]),
  );
  for (const { unit_id: unitId, at } of doubted) changes.unit(unitId, at.getTime());
}
