import { z } from 'zod';
import { equipmentSorts, type EquipmentSort } from '../contract/equipment.js';
import { invalid } from '../errors.js';
import { readCursor, writeCursor } from '../lib/cursor.js';
import type { Database } from '../lib/database.js';
import type { UnitSource } from './narrow-units.js';
import { canContain, findCandidates, identityCondition, type SearchMode } from './search-units.js';
import { ask } from './sql.js';
import {
  attentionRanges,
  attentionStatements,
  type AttentionKey,
  type AttentionPage,
} from './unit-attention.js';
import type { UnitFilters, UnitSearch } from './unit-filters.js';
import { dwellPage, lastSeenPage, unitPage, type PageRequest, type UnitKey } from './unit-order.js';

export interface UnitListRequest {
  sources: readonly UnitSource[];
  filters: Omit<UnitFilters, 'search'>;
  search?: string | undefined;
  sort: EquipmentSort;
  limit: number;
  cursor?: string | undefined;
  now: Date;
}

export interface UnitListPage {
  unitIds: number[];
  next: string | null;
  /** The instant that quiet and past limit are judged by: the same on every page of a list. */
  asOf: Date;
}

/** `at`: when the first page was asked for; `key` is an instant in ms where the sort goes by time. */
const cursorSchema = z.object({
  sort: z.enum(equipmentSorts),
  key: z.union([z.number(), z.string().regex(/^[ -~]{0,40}$/)]),
  unit: z.int().nonnegative(),
  at: z.number().min(0).max(8.64e15),
  range: z.enum(attentionRanges).optional(),
  mode: z.enum(['begins', 'contains']).optional(),
});
type Cursor = z.infer<typeof cursorSchema>;

interface Row {
  place?: number;
  sort_key: Date | string;
  unit_id: number;
}

/** One page of unit ids in the asked order. At most four statements, whatever the number of units. */
export async function listUnitIds(db: Database, request: UnitListRequest): Promise<UnitListPage> {
  const cursor = readCursor(request.cursor, cursorSchema);
  if (cursor && !fits(cursor, request.sort)) throw foreignCursor();
  const asOf = cursor ? new Date(cursor.at) : request.now;
  const pageBy = async (mode: SearchMode) => {
    const search = await searchOf(db, request.search, mode);
    const rows = search === 'nothing' ? [] : await rowsOf(db, request, cursor, asOf, search);
    return pageOfRows(rows, request, asOf, mode);
  };
  const page = await pageBy(cursor?.mode ?? 'begins');
  const retry = !cursor && page.unitIds.length === 0 && canContain(request.search ?? '');
  return retry ? pageBy('contains') : page;
}

async function searchOf(
  db: Database,
  text: string | undefined,
  mode: SearchMode,
): Promise<UnitSearch | undefined | 'nothing'> {
  if (text === undefined) return undefined;
  const condition = identityCondition(text, mode);
  if (!condition) return 'nothing';
  const unitIds = await findCandidates(db, condition);
  return unitIds?.length === 0 ? 'nothing' : { mode, unitIds, condition };
}

async function rowsOf(
  db: Database,
  request: UnitListRequest,
  cursor: Cursor | null,
  asOf: Date,
  search: UnitSearch | undefined,
): Promise<Row[]> {
  const page = {
    sources: request.sources,
    filters: { ...request.filters, search },
    now: asOf,
    rows: request.limit + 1,
  };
  const after = cursor && keyOf(cursor);
  switch (request.sort) {
    case 'attention':
      return attentionRows(db, {
        ...page,
        after: after && { ...after, range: cursor?.range ?? 'quiet' },
      });
    case 'lastSeen':
      return ask<Row>(db, lastSeenPage({ ...page, after } satisfies PageRequest, 'ASC'));
    case '-lastSeen':
      return ask<Row>(db, lastSeenPage({ ...page, after }, 'DESC'));
    case 'dwell':
      return ask<Row>(db, dwellPage({ ...page, after }));
    case 'unit':
      return ask<Row>(db, unitPage({ ...page, after }));
  }
}

async function attentionRows(db: Database, page: AttentionPage): Promise<Row[]> {
  const [front, back] = attentionStatements(page);
  const rows = front ? await ask<Row>(db, front) : [];
  if (!back || rows.length >= page.rows) return rows;
  return [...rows, ...(await ask<Row>(db, back))].slice(0, page.rows);
}

function pageOfRows(
  rows: Row[],
  { limit, sort }: UnitListRequest,
  asOf: Date,
  mode: SearchMode,
): UnitListPage {
  const shown = rows.slice(0, limit);
  const last = shown.at(-1);
  const next =
    rows.length > limit && last ? writeCursor(cursorAfter(last, sort, asOf, mode)) : null;
  return { unitIds: shown.map((row) => row.unit_id), next, asOf };
}

function cursorAfter(row: Row, sort: EquipmentSort, asOf: Date, mode: SearchMode): Cursor {
  return {
    sort,
    key: row.sort_key instanceof Date ? row.sort_key.getTime() : row.sort_key,
    unit: row.unit_id,
    at: asOf.getTime(),
    ...(row.place === undefined ? {} : { range: attentionRanges[row.place] }),
    ...(mode === 'contains' ? { mode } : {}),
  };
}

function keyOf({ key, unit }: Cursor): UnitKey | AttentionKey {
  return { sortKey: typeof key === 'number' ? new Date(key) : key, unitId: unit };
}

function fits(cursor: Cursor, sort: EquipmentSort): boolean {
  const isTimed = typeof cursor.key === 'number' && Math.abs(cursor.key) <= 8.64e15;
  return (
    cursor.sort === sort &&
    isTimed === (sort !== 'unit') &&
    (sort !== 'attention' || cursor.range !== undefined)
  );
}

const foreignCursor = () =>
  invalid('The cursor belongs to a list in another order.', [
    { pointer: '?cursor', detail: 'is not one that this list gave' },
  ]);
