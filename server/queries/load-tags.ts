import { normaliseTag, resolveTag } from '../domain/identifiers/resolve-tag.js';
import type { Database } from '../lib/database.js';
import { ask, sql } from './sql.js';

/** A tag of the register. `value` is its normalised form. */
export interface TagRow {
  value: string;
  side: string | null;
  valid_from: Date | null;
  valid_to: Date | null;
}

/** Tags registered for the unit, the present ones first. */
export async function loadTags(db: Database, unitId: number): Promise<TagRow[]> {
  const rows = await ask<Omit<TagRow, 'value'> & { value: Buffer }>(
    db,
    sql`SELECT value, side, valid_from, valid_to FROM tags WHERE unit_id = ${unitId}
      ORDER BY valid_to IS NULL DESC, valid_to DESC, side, value`,
  );
  return rows.map((row) => ({ ...row, value: row.value.toString('utf8') }));
}

/** On which side of its car a tag, as a reader gave it, is mounted: by the register, else by itself. */
export function tagSideOf(tags: readonly TagRow[], rawTag: string): 'left' | 'right' | null {
  const value = normaliseTag(rawTag);
  const side = tags.find((tag) => tag.value === value && tag.side !== null)?.side;
  if (side === 'left' || side === 'right') return side;
  const resolved = resolveTag(rawTag);
  return resolved.kind === 'aei' ? resolved.side : null;
}
