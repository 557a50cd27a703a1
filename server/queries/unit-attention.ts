import { FAR } from '../lib/sentinels.js';
import { conditionOf, type UnitSource } from './narrow-units.js';
import { joinSql, sql, word, type Sql } from './sql.js';
import { all, filterConditions, picksFew } from './unit-filters.js';
import { keyset, type PageRequest, type UnitKey } from './unit-order.js';

/**
 * What wants attention first, as ranges of the two instants that lie ready on each unit: quiet
 * longest, over its limit longest, nearest to its limit, nearest to quiet; then strangers that
 * went away, then what neither limit applies to. Each unit lies in exactly one.
 */
export const attentionRanges = [
  'quiet',
  'pastLimit',
  'standing',
  'moving',
  'strangers',
  'rest',
] as const;
export type AttentionRange = (typeof attentionRanges)[number];

/** The ranges that are short walks along an index; the others are asked only when these run out. */
const FRONT = ['quiet', 'pastLimit', 'standing', 'moving'] as const;

export interface AttentionKey extends UnitKey {
  range: AttentionRange;
}

export interface AttentionPage extends Omit<PageRequest, 'after'> {
  after: AttentionKey | null;
}

/** Statements to run one after the other until the page is full: one or two. */
export function attentionStatements(page: AttentionPage): Sql[] {
  const first = page.after ? attentionRanges.indexOf(page.after.range) : 0;
  const left = attentionRanges.slice(first);
  const front = left.filter((range) => (FRONT as readonly string[]).includes(range));
  const back = left.filter((range) => !(FRONT as readonly string[]).includes(range));
  return [front, back]
    .filter((ranges) => ranges.length > 0)
    .map((ranges) => statement(ranges, page));
}

function statement(ranges: AttentionRange[], page: AttentionPage): Sql {
  const selects = ranges.flatMap((range) =>
    page.sources
      .filter((source) => range !== 'strangers' || source.table === 'last_seen')
      .map((source) => select(range, source, page)),
  );
  if (selects.length === 0) {
    return sql`SELECT 0 AS place, s.at AS sort_key, s.unit_id FROM last_seen s LIMIT 0`;
  }
  return sql`${joinSql(selects, 'UNION')} ORDER BY place, sort_key, unit_id LIMIT ${page.rows}`;
}

function select(range: AttentionRange, source: UnitSource, page: AttentionPage): Sql {
  const { filters, now, after, rows } = page;
  const { column, condition } = rangeCondition(range, source, now);
  const key = sql`s.${word(`${column}_at`)}`;
  const free = picksFew(filters) || filters.siteId !== undefined || filters.state === 'unseen';
  const index = free ? word('') : word(`FORCE INDEX (${source.table}_${column})`);
  const begin = after?.range === range ? keyset(key, after, 'ASC') : null;
  return sql`(
    SELECT ${attentionRanges.indexOf(range)} AS place, ${key} AS sort_key, s.unit_id
    FROM ${word(source.table)} s ${index} STRAIGHT_JOIN units u ON u.id = s.unit_id
    WHERE ${all([conditionOf(source), condition, ...filterConditions(filters, now), begin])}
    ORDER BY ${key}, s.unit_id LIMIT ${rows})`;
}

/** The instant a range runs along, and what is in it. All of an owner's units are registered. */
function rangeCondition(
  range: AttentionRange,
  source: UnitSource,
  now: Date,
): { column: 'quiet' | 'limit'; condition: Sql } {
  const mayBeStranger = source.table === 'last_seen';
  const isQuiet = mayBeStranger
    ? sql`s.quiet_at <= ${now} AND u.registered = 1`
    : sql`s.quiet_at <= ${now}`;
  const isNotQuiet = mayBeStranger
    ? sql`(s.quiet_at > ${now} OR u.registered = 0)`
    : sql`s.quiet_at > ${now}`;
  switch (range) {
    case 'quiet':
      return { column: 'quiet', condition: isQuiet };
    case 'pastLimit':
      return { column: 'limit', condition: sql`s.limit_at <= ${now} AND ${isNotQuiet}` };
    case 'standing':
      return {
        column: 'limit',
        condition: sql`s.limit_at > ${now} AND s.limit_at < ${FAR} AND ${isNotQuiet}`,
      };
    case 'moving':
      return {
        column: 'quiet',
        condition: sql`s.quiet_at > ${now} AND s.quiet_at < ${FAR} AND s.limit_at = ${FAR}`,
      };
    case 'strangers':
      return {
        column: 'quiet',
        condition: sql`s.quiet_at <= ${now} AND s.limit_at = ${FAR} AND u.registered = 0`,
      };
    case 'rest':
      return { column: 'quiet', condition: sql`s.quiet_at = ${FAR} AND s.limit_at = ${FAR}` };
  }
}
