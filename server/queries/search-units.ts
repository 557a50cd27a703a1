import { parseUnit } from '../domain/identifiers/parse-unit.js';
import type { Database } from '../lib/database.js';
import { ask, joinSql, sql, type Sql } from './sql.js';

/** How a text is compared: from the beginning, or, when nothing begins with it, anywhere in it. */
export type SearchMode = 'begins' | 'contains';

/** Above this, a search narrows the ordered list instead of being looked up first. */
export const MOST_CANDIDATES = 1_000;

/** Digits that are too few to be looked for in the middle of numbers. */
const FEWEST_CONTAINED = 3;

/**
 * The condition on `identities i` (present and former ones) for what a person typed: a number
 * alone, a mark, or the beginning of either, padded or not. Null when no identity can match.
 */
export function identityCondition(text: string, mode: SearchMode): Sql | null {
  const joined = text.replace(/[^0-9A-Za-z]/g, '').toUpperCase();
  if (/^[0-9]{1,12}$/.test(joined)) return numberCondition(joined, mode);
  if (mode === 'contains' || !/^[A-Z]{1,4}[0-9]{0,12}$/.test(joined)) return null;
  const parsed = parseUnit(joined);
  const compacts = parsed.kind === 'unit' ? [parsed.identity.compact] : [];
  const unpadded = joined.replace(/^([A-Z]+)0+(?=[0-9])/, '$1');
  const beginnings = [...new Set([joined, unpadded, ...compacts])];
  return either(beginnings.map((start) => sql`i.compact LIKE ${`${start}%`}`));
}

/** The condition on `identities i` for a whole number or mark and number; null for a part of one. */
export function exactCondition(text: string): Sql | null {
  const parsed = parseUnit(text);
  if (parsed.kind === 'unit') return sql`i.compact = ${parsed.identity.compact}`;
  return parsed.kind === 'number' ? sql`i.number IN (${parsed.numbers})` : null;
}

/** True when a text in which nothing begins may be looked for inside numbers. */
export function canContain(text: string): boolean {
  const joined = text.replace(/[^0-9A-Za-z]/g, '');
  return /^[0-9]{1,11}$/.test(joined) && joined.length >= FEWEST_CONTAINED;
}

function numberCondition(digits: string, mode: SearchMode): Sql {
  if (mode === 'contains') return sql`i.number LIKE ${`%${digits}%`}`;
  const parsed = parseUnit(digits);
  const exact = parsed.kind === 'number' ? parsed.numbers : [];
  const unpadded = digits.replace(/^0+(?=[0-9])/, '');
  const beginnings = [...new Set([digits, unpadded])];
  return either([
    ...beginnings.map((start) => sql`i.number LIKE ${`${start}%`}`),
    ...(exact.length > 0 ? [sql`i.number IN (${exact})`] : []),
  ]);
}

function either(conditions: Sql[]): Sql {
  return sql`(${joinSql(conditions, 'OR')})`;
}

/**
 * Ids of units with an identity that matches, of everybody's: whoever asks narrows them. Null
 * when there are more than MOST_CANDIDATES.
 */
export async function findCandidates(db: Database, condition: Sql): Promise<number[] | null> {
  const rows = await ask<{ unit_id: number }>(
    db,
    sql`SELECT DISTINCT i.unit_id FROM identities i WHERE ${condition} LIMIT ${MOST_CANDIDATES + 1}`,
  );
  return rows.length > MOST_CANDIDATES ? null : rows.map((row) => row.unit_id);
}

/** True for an identity that `identityCondition` of the text finds, whichever mode. */
export function identityMatches(identity: { compact: string; number: string }, text: string) {
  const joined = text.replace(/[^0-9A-Za-z]/g, '').toUpperCase();
  const unpadded = joined.replace(/^([A-Z]*)0+(?=[0-9])/, '$1');
  const parsed = parseUnit(joined);
  if (parsed.kind === 'unit' && parsed.identity.compact === identity.compact) return true;
  if (parsed.kind === 'number' && parsed.numbers.includes(identity.number)) return true;
  return /^[0-9]+$/.test(joined)
    ? identity.number.includes(joined) || identity.number.startsWith(unpadded)
    : identity.compact.startsWith(joined) || identity.compact.startsWith(unpadded);
}
