import type { UnitState } from '../contract/equipment.js';
import { FAR } from '../lib/sentinels.js';
import { conditionOf, type UnitSource } from './narrow-units.js';
import { joinSql, sql, word, type Sql } from './sql.js';
import { all, filterConditions, type UnitFilters } from './unit-filters.js';
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

/** Quiet goes with being under way, a limit with standing: by state, these ranges can hold rows. */
const RANGES_BY_STATE: Record<UnitState, readonly AttentionRange[]> = {
  onHand: ['pastLimit', 'standing', 'rest'],
  enRoute: ['quiet', 'moving', 'strangers', 'rest'],
  unseen: ['rest'],
};

/** Whether rows that pass the filters can lie in the range. */
function isPossible(range: AttentionRange, { state, quiet, pastLimit }: UnitFilters): boolean {
  return (
    (!state || RANGES_BY_STATE[state].includes(range)) &&
    (quiet === undefined || quiet === (range === 'quiet')) &&
    (pastLimit === undefined || pastLimit === (range === 'pastLimit'))
  );
}

/** Sites of a person beyond which they are filtered instead of walked one by one. */
const MOST_SLICES = 30;

/** Statements to run one after the other until the page is full: one or two. */
export function attentionStatements(page: AttentionPage): Sql[] {
  const first = page.after ? attentionRanges.indexOf(page.after.range) : 0;
  const left = attentionRanges.slice(first).filter((range) => isPossible(range, page.filters));
  const front = left.filter((range) => (FRONT as readonly string[]).includes(range));
  const back = left.filter((range) => !(FRONT as readonly string[]).includes(range));
  return [front, back]
    .filter((ranges) => ranges.length > 0)
    .map((ranges) => statement(ranges, page));
}

function statement(ranges: AttentionRange[], page: AttentionPage): Sql {
  const slices = page.sources.flatMap((source) => slicesOf(source, page.filters));
  const selects = ranges.flatMap((range) =>
    slices
      .filter(({ table }) => range !== 'strangers' || table === 'last_seen')
      .map((slice) => select(range, slice, page)),
  );
  if (selects.length === 0) {
    return sql`SELECT 0 AS place, s.at AS sort_key, s.unit_id FROM last_seen s LIMIT 0`;
  }
  return sql`${joinSql(selects, 'UNION')} ORDER BY place, sort_key, unit_id LIMIT ${page.rows}`;
}

/** A piece of a source; `index` null: the one of the range's own instant. */
interface Slice {
  table: UnitSource['table'];
  condition: Sql | null;
  prefix: string;
  index: string | null;
}

function slicesOf(source: UnitSource, filters: UnitFilters): Slice[] {
  const { table } = source;
  const siteIds = siteIdsOf(source, filters.siteId);
  const index = indexBefore(table, filters);
  if (index !== null || siteIds === null || siteIds.length > MOST_SLICES) {
    return [{ table, condition: conditionOf(source), prefix: table, index }];
  }
  const prefix = 'last_seen_site';
  return siteIds.map((id) => ({ table, condition: sql`s.site_id = ${id}`, prefix, index }));
}

/** The index that goes before those of the ranges, because a filter picks few rows by it. */
function indexBefore(table: UnitSource['table'], filters: UnitFilters): string | null {
  if (filters.search?.unitIds) return 'PRIMARY';
  if (filters.siteId !== undefined && table === 'visible_units') return 'visible_units_site';
  return filters.state === 'unseen' ? `${table}_state` : null;
}

/** Sites by which last seen can be walked; null where it is not cut by site. */
function siteIdsOf(source: UnitSource, siteId: number | undefined): number[] | null {
  if (source.table === 'visible_units') return null;
  if (siteId === undefined) return source.siteIds;
  return source.siteIds === null || source.siteIds.includes(siteId) ? [siteId] : [];
}

function select(range: AttentionRange, slice: Slice, page: AttentionPage): Sql {
  const { filters, now, after, rows } = page;
  const { column, condition } = rangeCondition(range, slice.table, now);
  const key = sql`s.${word(`${column}_at`)}`;
  const index = word(slice.index ?? `${slice.prefix}_${column}`);
  const begin = after?.range === range ? keyset(key, after, 'ASC') : null;
  return sql`(
    SELECT ${attentionRanges.indexOf(range)} AS place, ${key} AS sort_key, s.unit_id
    FROM ${word(slice.table)} s FORCE INDEX (${index}) STRAIGHT_JOIN units u ON u.id = s.unit_id
    WHERE ${all([slice.condition, condition, ...filterConditions(filters, now), begin])}
    ORDER BY ${key}, s.unit_id LIMIT ${rows})`;
}

/** The instant a range runs along, and what is in it. All of an owner's units are registered. */
function rangeCondition(
  range: AttentionRange,
  table: UnitSource['table'],
  now: Date,
): { column: 'quiet' | 'limit'; condition: Sql } {
  const mayBeStranger = table === 'last_seen';
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
