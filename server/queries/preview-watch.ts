import type { Database } from '../lib/database.js';
import type { Actor } from '../policies/actor.js';
import type { WatchedUnitRecord } from '../presenters/watched-unit.js';
import { ask, sql } from './sql.js';
import { unitNames } from './unit-names.js';
import { watchedUnits, type WatchRule } from './watched-units.js';

const SHOWN = 10;

export interface WatchPreview {
  covers: number;
  wouldRaise: number;
  /** The longest first. */
  first: WatchedUnitRecord[];
}

interface FirstRow {
  unit_id: number;
  kind: string;
  site_code: string | null;
  site_name: string | null;
  since_at: Date;
  at_least: number;
}

/** What a watch would cover and raise at `now`, seen with the eyes of `actor`. Three queries. */
export async function previewWatch(
  db: Database,
  actor: Actor,
  rule: WatchRule,
  now: Date,
): Promise<WatchPreview> {
  const { from, covered, raises, since, atLeast, siteId } = watchedUnits(rule, actor, now);
  const [[counts], rows] = await Promise.all([
    ask<{ covers: number; would_raise: number }>(
      db,
      sql`SELECT COUNT(*) AS covers, CAST(COALESCE(SUM(${raises}), 0) AS INT) AS would_raise
          FROM ${from} WHERE ${covered}`,
    ),
    ask<FirstRow>(
      db,
      sql`SELECT u.id AS unit_id, u.kind, p.code AS site_code, p.name AS site_name,
            ${since} AS since_at, ${atLeast} AS at_least
          FROM ${from} LEFT JOIN sites p ON p.id = ${siteId}
          WHERE ${raises} ORDER BY since_at, u.id LIMIT ${SHOWN}`,
    ),
  ]);
  const names = await unitNames(
    db,
    rows.map((row) => row.unit_id),
    now,
  );
  return {
    covers: counts?.covers ?? 0,
    wouldRaise: counts?.would_raise ?? 0,
    first: rows.map((row) => ({
      name: names.get(row.unit_id) ?? null,
      kind: row.kind,
      site: row.site_code === null ? null : { code: row.site_code, name: row.site_name ?? '' },
      sinceAt: row.since_at,
      atLeast: row.at_least === 1,
    })),
  };
}
