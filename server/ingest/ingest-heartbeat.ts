import type { HeartbeatBody } from '../contract/heartbeat.js';
import { insertRows } from '../lib/bulk.js';
import { withTransaction, type Database } from '../lib/database.js';
import { asUnavailable } from './as-unavailable.js';

/**
 * Keeps the last word of a site's reader, by the order in which they come: its own clock is what
 * may be wrong. Throws a 503 problem when the database is away.
 */
export async function ingestHeartbeat(
  db: Database,
  { siteId, heartbeat, receivedAt }: { siteId: number; heartbeat: HeartbeatBody; receivedAt: Date },
): Promise<void> {
  const { readerTime, antennas } = heartbeat;
  const offsetMs = readerTime.getTime() - receivedAt.getTime();
  await asUnavailable(() =>
    withTransaction(db.pool, async (connection) => {
      await insertRows(
        connection,
        'site_heartbeats',
        ['site_id', 'reader_time', 'received_at', 'clock_offset_ms'],
        [[siteId, readerTime, receivedAt, offsetMs]],
        ['reader_time', 'received_at', 'clock_offset_ms'],
      );
      if (antennas.length === 0) return;
      await insertRows(
        connection,
        'antenna_heartbeats',
        ['site_id', 'number', 'powered', 'noise', 'received_at'],
        antennas.map(({ number, powered, noise }) => {
          return [siteId, number, powered, noise ?? null, receivedAt];
        }),
        ['powered', 'noise', 'received_at'],
      );
    }),
  );
}
