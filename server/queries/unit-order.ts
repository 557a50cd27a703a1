import { FAR } from '../lib/sentinels.js';
import { conditionOf, type UnitSource } from './narrow-units.js';
import { joinSql, sql, word, type Sql } from './sql.js';
import { all, filterConditions, pickingIndex, type UnitFilters } from './unit-filters.js';

/** Where a page begins: the sort value and unit of the last row before it. */
export interface UnitKey {
  sortKey: Date | string;
  unitId: number;
}

/** Everything that the statements of a page share. */
export interface PageRequest {
  sources: readonly UnitSource[];
  filters: UnitFilters;
  now: Date;
  after: UnitKey | null;
  /** Rows wanted, the one that tells of a next page included. */
  rows: number;
}

/**
 * The page in the order of the last sighting. Each source (and each site of it) is walked along
 * its own index and gives no more than a page; only these few rows are sorted.
 */
export function lastSeenPage(page: PageRequest, direction: 'ASC' | 'DESC'): Sql {
  const { filters, now, after, rows } = page;
  const slices = page.sources.flatMap((source) => slicesOf(source, filters));
  const order = word(direction);
  const selects = slices.map(
    ({ from, condition }) => sql`(
      SELECT s.at AS sort_key, s.unit_id FROM ${from} STRAIGHT_JOIN units u ON u.id = s.unit_id
      WHERE ${all([condition, ...filterConditions(filters, now), keyset(sql`s.at`, after, direction)])}
      ORDER BY s.at ${order}, s.unit_id ${order} LIMIT ${rows})`,
  );
  return union(selects, order, rows);
}

/**
 * The page by how long it has stood, longest first; what does not stand comes after, by unit. So do
 * locomotives and the like, which no limit applies to, unless their kind is asked for.
 */
export function dwellPage(page: PageRequest): Sql {
  const { filters, now, after, rows } = page;
  const counts = filters.kind ? sql`TRUE` : sql`s.limit_at < ${FAR}`;
  const since = sql`IF(s.state = 'onHand' AND ${counts},
    COALESCE(l.arrived_at, l.stay_first_seen_at, l.at), CAST(${FAR} AS DATETIME(3)))`;
  const selects = page.sources.map(
    (source) => sql`(
      SELECT ${since} AS sort_key, s.unit_id FROM ${word(source.table)} s
      JOIN units u ON u.id = s.unit_id JOIN last_seen l ON l.unit_id = s.unit_id
      WHERE ${all([conditionOf(source), ...filterConditions(filters, now), keyset(since, after, 'ASC')])}
      ORDER BY sort_key, s.unit_id LIMIT ${rows})`,
  );
  return union(selects, word('ASC'), rows);
}

/** The page by mark, then number as a number, of the identity each unit has now. */
export function unitPage(page: PageRequest): Sql {
  const { filters, now, after, rows } = page;
  const mark = sql`(
    SELECT CONCAT(RPAD(i.mark, 8, ' '), LPAD(i.number, 12, '0')) FROM identities i
    WHERE i.unit_id = s.unit_id
    ORDER BY ((i.valid_from IS NULL OR i.valid_from <= ${now}) AND (i.valid_to IS NULL OR i.valid_to > ${now})) DESC,
      (i.valid_from IS NULL OR i.valid_from <= ${now}) DESC, i.valid_from DESC, i.id DESC
    LIMIT 1)`;
  const selects = page.sources.map(
    (source) => sql`(
      SELECT t.sort_key, t.unit_id FROM (
        SELECT COALESCE(${mark}, '') AS sort_key, s.unit_id FROM ${word(source.table)} s
        JOIN units u ON u.id = s.unit_id
        WHERE ${all([conditionOf(source), ...filterConditions(filters, now)])}
      ) t
      WHERE ${all([keyset(sql`t.sort_key`, after, 'ASC', sql`t.unit_id`)])}
      ORDER BY t.sort_key, t.unit_id LIMIT ${rows})`,
  );
  return union(selects, word('ASC'), rows);
}

/** Keyset in the form that uses an index range; the row constructor would not. */
export function keyset(
  column: Sql,
  after: UnitKey | null,
  direction: 'ASC' | 'DESC',
  unitId: Sql = sql`s.unit_id`,
): Sql | null {
  if (!after) return null;
  const sign = word(direction === 'ASC' ? '>' : '<');
  return sql`${column} ${sign}= ${after.sortKey} AND (${column} ${sign} ${after.sortKey} OR ${unitId} ${sign} ${after.unitId})`;
}

interface Slice {
  from: Sql;
  condition: Sql | null;
}

/** The source cut so that each piece has an index in the order of the last sighting. */
function slicesOf(source: UnitSource, filters: UnitFilters): Slice[] {
  const { table } = source;
  const { siteId, state } = filters;
  const picking = pickingIndex(table, filters);
  const along = siteId !== undefined ? 'site' : state ? 'state' : 'at';
  const from = (index: string) => sql`${word(table)} s FORCE INDEX (${word(picking ?? index)})`;
  if (table === 'visible_units' || source.siteIds === null) {
    return [{ from: from(`${table}_${along}`), condition: conditionOf(source) }];
  }
  return source.siteIds
    .filter((id) => siteId === undefined || id === siteId)
    .map((id) => ({ from: from('last_seen_site'), condition: sql`s.site_id = ${id}` }));
}

function union(selects: Sql[], order: Sql, rows: number): Sql {
  if (selects.length === 0) return sql`SELECT s.at AS sort_key, s.unit_id FROM last_seen s LIMIT 0`;
  return sql`${joinSql(selects, 'UNION')} ORDER BY sort_key ${order}, unit_id ${order} LIMIT ${rows}`;
}
