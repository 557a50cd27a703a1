import type { HeartbeatView } from '../contract/heartbeat.js';

/** What `presentHeartbeat` takes: the last word of a site's reader and of each antenna. */
export interface HeartbeatRecord {
  received_at: Date;
  clock_offset_ms: number;
  antennas: { number: number; powered: number; noise: number | null; received_at: Date }[];
}

/** How a site's reader said it was; null when it never did. */
export function presentHeartbeat(row: HeartbeatRecord | undefined): HeartbeatView | null {
  if (!row) return null;
  return {
    at: row.received_at.toISOString(),
    clockOffsetMs: row.clock_offset_ms,
    antennas: row.antennas.map(({ number, powered, noise, received_at: receivedAt }) => ({
      number,
      powered: Boolean(powered),
      noise,
      at: receivedAt.toISOString(),
    })),
  };
}
