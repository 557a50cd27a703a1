import type { Database } from '../lib/database.js';
import type { HeartbeatRecord } from '../presenters/heartbeat.js';
import { ask, sql } from './sql.js';

interface SiteRow {
  site_id: number;
  received_at: Date;
  clock_offset_ms: number;
}

interface AntennaRow {
  site_id: number;
  number: number;
  powered: number;
  noise: number | null;
  received_at: Date;
}

/** The last heartbeat by site id; sites whose reader never sent one are not in it. */
export async function loadHeartbeats(
  db: Database,
  siteIds: readonly number[],
): Promise<Map<number, HeartbeatRecord>> {
  if (siteIds.length === 0) return new Map();
  const [sites, antennas] = await Promise.all([
    ask<SiteRow>(
      db,
      sql`SELECT site_id, received_at, clock_offset_ms FROM site_heartbeats
        WHERE site_id IN (${siteIds})`,
    ),
    ask<AntennaRow>(
      db,
      sql`SELECT site_id, number, powered, noise, received_at FROM antenna_heartbeats
        WHERE site_id IN (${siteIds}) ORDER BY site_id, number`,
    ),
  ]);
  return new Map(
    sites.map((row) => {
      const own = antennas.filter(({ site_id: siteId }) => siteId === row.site_id);
      return [row.site_id, { ...row, antennas: own }];
    }),
  );
}
