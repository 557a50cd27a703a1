import type { UnitState } from '../contract/equipment.js';
import { joinSql, sql, type Sql } from './sql.js';
import type { SearchMode } from './search-units.js';

/** What narrows a list of units, resolved to ids; absent parts narrow nothing. */
export interface UnitFilters {
  state?: UnitState | undefined;
  quiet?: boolean | undefined;
  pastLimit?: boolean | undefined;
  siteId?: number | undefined;
  ownerId?: number | undefined;
  kind?: string | undefined;
  search?: UnitSearch | undefined;
}

/** Ids when they are few; else the condition on `identities i` that they would be found by. */
export interface UnitSearch {
  mode: SearchMode;
  unitIds: number[] | null;
  condition: Sql;
}

/** Quiet: registered, en route, and its last read further back than its limit. */
export const quietCondition = (now: Date): Sql => sql`(s.quiet_at <= ${now} AND u.registered = 1)`;

/** Conditions on rows `s` of a source joined with its `units u`. */
export function filterConditions(filters: UnitFilters, now: Date): Sql[] {
  const { state, quiet, pastLimit, siteId, ownerId, kind, search } = filters;
  return [
    state && sql`s.state = ${state}`,
    siteId !== undefined && sql`s.site_id = ${siteId}`,
    quiet !== undefined && (quiet ? quietCondition(now) : sql`NOT ${quietCondition(now)}`),
    pastLimit !== undefined && (pastLimit ? sql`s.limit_at <= ${now}` : sql`s.limit_at > ${now}`),
    ownerId !== undefined && sql`u.owner_id = ${ownerId}`,
    kind && sql`u.kind = ${kind}`,
    search && searchCondition(search),
  ].filter((piece): piece is Sql => Boolean(piece));
}

function searchCondition({ unitIds, condition }: UnitSearch): Sql {
  return unitIds
    ? sql`s.unit_id IN (${unitIds})`
    : sql`EXISTS (SELECT 1 FROM identities i WHERE i.unit_id = s.unit_id AND ${condition})`;
}

/** The index by which a filter picks few rows; null: better to walk in the order of the list. */
export function pickingIndex(
  table: string,
  { quiet, pastLimit, search }: UnitFilters,
): string | null {
  if (search?.unitIds) return 'PRIMARY';
  if (quiet) return `${table}_quiet`;
  return pastLimit ? `${table}_limit` : null;
}

/** Joins conditions; none is true. */
export const all = (conditions: readonly (Sql | null)[]): Sql => {
  const given = conditions.filter((piece): piece is Sql => piece !== null);
  return given.length === 0 ? sql`TRUE` : joinSql(given, 'AND');
};
