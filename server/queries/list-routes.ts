import { Op, QueryTypes } from 'sequelize';
import { z } from 'zod';
import { pageFrom, readCursor } from '../lib/cursor.js';
import type { Database } from '../lib/database.js';
import { modelsOf } from '../models/index.js';
import type { RouteNode } from '../models/route-node.js';
import { siteCodesById } from './list-sites.js';

interface Page {
  limit: number;
  cursor?: string | undefined;
}

/** An edge with the codes of its ends. */
export interface RouteEdgeRow {
  id: number;
  from: string;
  to: string;
  railMetres: number;
  kind: string;
  line: string;
}

const selectEdges = `
  SELECT route_edges.id, a.code AS \`from\`, b.code AS \`to\`,
         route_edges.rail_metres AS railMetres, route_edges.kind, route_edges.line
    FROM route_edges
    JOIN route_nodes a ON a.id = route_edges.from_node_id
    JOIN route_nodes b ON b.id = route_edges.to_node_id`;

/** Edges of the route graph by id. */
export async function listRouteEdges(db: Database, { limit, cursor }: Page) {
  const after = readCursor(cursor, z.int().min(0)) ?? 0;
  const rows = await db.sequelize.query<RouteEdgeRow>(
    `${selectEdges} WHERE route_edges.id > :after ORDER BY route_edges.id LIMIT :most`,
    { type: QueryTypes.SELECT, replacements: { after, most: limit + 1 } },
  );
  return pageFrom(rows, limit, (last) => last.id);
}

/** The edge with this id, or null. */
export async function findRouteEdge(db: Database, id: number): Promise<RouteEdgeRow | null> {
  const [edge] = await db.sequelize.query<RouteEdgeRow>(
    `${selectEdges} WHERE route_edges.id = :id`,
    { type: QueryTypes.SELECT, replacements: { id } },
  );
  return edge ?? null;
}

/** The edges with these ends (either way round) and lines, in that order. */
export async function findRouteEdgesByEnds(
  db: Database,
  wanted: { from: string; to: string; line: string }[],
): Promise<RouteEdgeRow[]> {
  if (wanted.length === 0) return [];
  const codes = [...new Set(wanted.flatMap(({ from, to }) => [from, to]))];
  const rows = await db.sequelize.query<RouteEdgeRow>(
    `${selectEdges} WHERE a.code IN (:codes) AND b.code IN (:codes)`,
    { type: QueryTypes.SELECT, replacements: { codes } },
  );
  const keyOf = ({ from, to, line }: { from: string; to: string; line: string }) =>
    `${[from, to].sort().join(' ')} ${line.toLowerCase()}`;
  const byKey = new Map(rows.map((row) => [keyOf(row), row]));
  return wanted.flatMap((edge) => byKey.get(keyOf(edge)) ?? []);
}

/** Nodes of the route graph by code, with the codes of their sites by site id. */
export async function listRouteNodes(db: Database, { limit, cursor }: Page) {
  const after = readCursor(cursor, z.string().max(16));
  const found = await modelsOf(db.sequelize).RouteNode.findAll({
    where: after === null ? {} : { code: { [Op.gt]: after } },
    order: [['code', 'ASC']],
    limit: limit + 1,
  });
  const { rows, next } = pageFrom(found, limit, (last) => last.code);
  return {
    rows,
    next,
    codes: await siteCodesById(
      db,
      rows.map((row) => row.siteId),
    ),
  };
}

/** The nodes with these codes, in that order, with the codes of their sites by site id. */
export async function findRouteNodes(
  db: Database,
  codes: string[],
): Promise<{ rows: RouteNode[]; codes: Map<number, string> }> {
  const found = await modelsOf(db.sequelize).RouteNode.findAll({ where: { code: codes } });
  const byCode = new Map(found.map((row) => [row.code, row]));
  const rows = codes.flatMap((code) => byCode.get(code) ?? []);
  return {
    rows,
    codes: await siteCodesById(
      db,
      rows.map((row) => row.siteId),
    ),
  };
}
