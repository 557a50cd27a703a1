import type { MapQuery } from '../contract/map.js';
import type { Database } from '../lib/database.js';
import type { UnitSource } from './narrow-units.js';
import { conditionOf } from './narrow-units.js';
import { ask, joinSql, sql, word, type Sql } from './sql.js';
import { all } from './unit-filters.js';
import type { EdgeRecord } from '../presenters/map.js';

type Box = NonNullable<MapQuery['bbox']>;

export interface MapSiteRow {
  id: number;
  code: string;
  name: string;
  kind: string;
  latitude: number;
  longitude: number;
  leads: string;
}

export type MapEdgeRow = EdgeRecord;

export interface MapCountRow {
  site_id: number;
  on_hand: number;
  en_route: number;
  quiet: number;
  past_limit: number;
}

/** Sites in the box, all without one. Where things are is the same for everybody. */
export function listMapSites(db: Database, box: Box | undefined): Promise<MapSiteRow[]> {
  return ask<MapSiteRow>(
    db,
    sql`SELECT id, code, name, kind, latitude, longitude, leads FROM sites s
      WHERE ${box ? within(box, sql`s`) : sql`TRUE`} ORDER BY code`,
  );
}

/** Edges of the route graph whose own box meets the box, so that lines run on past its edge. */
export function listMapEdges(db: Database, box: Box | undefined): Promise<MapEdgeRow[]> {
  return ask<MapEdgeRow>(
    db,
    sql`SELECT e.id, e.line, e.kind, e.rail_metres,
        f.code AS from_code, f.name AS from_name,
        f.latitude AS from_latitude, f.longitude AS from_longitude,
        t.code AS to_code, t.name AS to_name,
        t.latitude AS to_latitude, t.longitude AS to_longitude
      FROM route_edges e JOIN route_nodes f ON f.id = e.from_node_id
      JOIN route_nodes t ON t.id = e.to_node_id
      WHERE ${box ? meets(box) : sql`TRUE`} ORDER BY f.code, t.code, e.line`,
  );
}

/** How many of the sources' units stand at, or last left, each site; each unit once. */
export async function countBySite(
  db: Database,
  sources: readonly UnitSource[],
  now: Date,
): Promise<MapCountRow[]> {
  if (sources.length === 0) return [];
  const columns = word('s.unit_id, s.site_id, s.state, s.quiet_at, s.limit_at');
  const units = sources.map(
    (source) => sql`SELECT ${columns} FROM ${word(source.table)} s
      WHERE ${all([conditionOf(source), sql`s.site_id > 0`])}`,
  );
  return ask<MapCountRow>(
    db,
    sql`SELECT c.site_id, SUM(c.state = 'onHand') AS on_hand, SUM(c.state = 'enRoute') AS en_route,
        SUM(u.id IS NOT NULL) AS quiet, SUM(c.limit_at <= ${now}) AS past_limit
      FROM (${joinSql(units, 'UNION')}) c
      LEFT JOIN units u ON u.id = c.unit_id AND u.registered = 1 AND c.quiet_at <= ${now}
      GROUP BY c.site_id`,
  );
}

function within({ west, south, east, north }: Box, place: Sql): Sql {
  const spans = west <= east ? word('AND') : word('OR');
  return sql`(${place}.latitude BETWEEN ${south} AND ${north}
    AND (${place}.longitude >= ${west} ${spans} ${place}.longitude <= ${east}))`;
}

/** A box over the date line shows the edges with an end in it. */
function meets(box: Box): Sql {
  const { west, south, east, north } = box;
  const anEndIn = sql`(${within(box, sql`f`)} OR ${within(box, sql`t`)})`;
  if (west > east) return anEndIn;
  return sql`(LEAST(f.latitude, t.latitude) <= ${north} AND GREATEST(f.latitude, t.latitude) >= ${south}
    AND LEAST(f.longitude, t.longitude) <= ${east} AND GREATEST(f.longitude, t.longitude) >= ${west})`;
}
