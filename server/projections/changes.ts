import type { PassKey } from '../domain/movements/passes.js';
import type { Placed } from './neighbours.js';
import type { PassageRow } from './passage-rows.js';

/** A key as text, to look up by. */
export function passKeyOf({ readPointId, startedAt, ordinal }: PassKey): string {
  return `${readPointId} ${startedAt} ${ordinal}`;
}

/** The pass that a stored passage is in; null for a stray. */
export function passOfRow(
  row: Pick<PassageRow, 'read_point_id' | 'pass_started_at' | 'pass_ordinal'>,
): PassKey | null {
  if (row.pass_started_at === null || row.pass_ordinal === null) return null;
  const startedAt = row.pass_started_at.getTime();
  return { readPointId: row.read_point_id, startedAt, ordinal: row.pass_ordinal };
}

/** What a portion has changed so far, and what must be looked at because of it. */
export class Changes {
  /** Passages that are new, gone or otherwise than before. */
  readonly passages: Placed[] = [];
  /** Units to fold again, and from when on (ms). */
  readonly dirty = new Map<number, number>();
  /** Passes that came, went, or whose units or their directions are otherwise than before. */
  readonly passes = new Map<string, PassKey>();
  /** Passes whose direction must be voted on. */
  readonly undirected = new Map<string, PassKey>();

  passage(changed: Placed): void {
    this.passages.push(changed);
    this.unit(changed.unit_id, changed.first_at.getTime());
  }

  /** Marks a unit from `at` (ms) on, or from an earlier instant already marked. */
  unit(unitId: number, at: number): void {
    this.dirty.set(unitId, Math.min(this.dirty.get(unitId) ?? Infinity, at));
  }

  pass(key: PassKey): void {
    this.passes.set(passKeyOf(key), key);
  }

  vote(key: PassKey): void {
    this.undirected.set(passKeyOf(key), key);
  }
}
