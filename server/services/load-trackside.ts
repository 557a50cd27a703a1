import type { Transaction } from 'sequelize';
import { connectionOf } from '../lib/connection-of.js';

export interface SiteRow {
  id: number;
  code: string;
  kind: string;
  return_hours: number;
  dwell_limit_hours: number;
  leads: string;
}

export interface PointRow {
  id: number;
  site_id: number;
  code: string;
  track: string | null;
  kind: string;
  decreasing_site_id: number | null;
  decreasing_track: string | null;
  increasing_site_id: number | null;
  increasing_track: string | null;
  pass_gap_seconds: number;
  visit_gap_seconds: number;
  drill_minutes: number;
  toward: string;
}

export interface AntennaRow {
  site_id: number;
  number: number;
  read_point_id: number;
  offset_m: string | number;
  side: string;
}

/** The part of the configuration that stands along the track, as it is at one moment. */
export interface Trackside {
  sites: Map<number, SiteRow>;
  points: Map<number, PointRow>;
  /** By site id and number. */
  antennas: Map<string, AntennaRow>;
  /** Each edge of the route graph as text, in order. */
  edges: string;
}

interface EdgeRow {
  edge: string;
}

/** Reads it within the transaction; five statements whatever its size. */
export async function loadTrackside(transaction: Transaction): Promise<Trackside> {
  const connection = connectionOf(transaction);
  const sites = await connection.query<SiteRow[]>(
    'SELECT id, code, kind, return_hours, dwell_limit_hours, leads FROM sites',
  );
  const points = await connection.query<PointRow[]>('SELECT * FROM read_points');
  const antennas = await connection.query<AntennaRow[]>(
    'SELECT site_id, number, read_point_id, offset_m, side FROM antennas',
  );
  const edges = await connection.query<EdgeRow[]>(
    `SELECT CONCAT_WS(' ', LEAST(from_node_id, to_node_id), GREATEST(from_node_id, to_node_id),
       LEAST(a.site_id, b.site_id), GREATEST(a.site_id, b.site_id), kind, rail_metres) AS edge
     FROM route_edges
     JOIN route_nodes a ON a.id = from_node_id
     JOIN route_nodes b ON b.id = to_node_id`,
  );
  return {
    sites: new Map(sites.map((row) => [row.id, row])),
    points: new Map(points.map((row) => [row.id, row])),
    antennas: new Map(antennas.map((row) => [`${row.site_id} ${row.number}`, row])),
    edges: edges
      .map(({ edge }) => edge)
      .sort()
      .join('\n'),
  };
}
