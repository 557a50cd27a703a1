import { setTimeout as pause } from 'node:timers/promises';
import { openDatabase } from '../../server/lib/database.js';
import type { Portal } from './portal.js';
import { secondOf } from './yard-traffic.js';

const POLL_MS = 100;

/**
 * The floor: the same reads at the same pace, inserted bare, one statement and commit a request,
 * into a table that nothing folds, and a poll for new rows every 100 ms that fetches one of them.
 * Answers the milliseconds from the insert's answer to the row that was fetched.
 */
export async function bareVisible(
  { db, databaseUrl, senders }: Portal,
  goOn: () => boolean,
): Promise<number[]> {
  await db.pool.query('CREATE OR REPLACE TABLE bare_reads LIKE `reads`');
  await db.pool.query('ALTER TABLE bare_reads REMOVE PARTITIONING');
  const delays: number[] = [];
  const stored = new Map<number, number>();
  let batch = 0;
  const writers = openDatabase(databaseUrl, { connections: 10 });
  const poll = async () => {
    let seen = 0;
    while (goOn() || stored.size > 0) {
      const [row] = await db.pool.query<{ last: number | null }[]>(
        'SELECT MAX(batch_id) AS last FROM bare_reads',
      );
      const last = row?.last ?? 0;
      if (last > seen) await db.pool.query('SELECT * FROM bare_reads WHERE batch_id = ?', [last]);
      const now = performance.now();
      for (const [id, at] of stored) {
        if (id > last) continue;
        stored.delete(id);
        delays.push(now - at);
      }
      seen = last;
      await pause(POLL_MS);
    }
  };
  const insert = async (site: number, siteId: number) => {
    const shift = (site / senders.length) * 1000;
    while (goOn()) {
      const now = Date.now();
      const ends = Math.ceil((now - shift) / 1000) * 1000 + shift;
      await pause(ends - now);
      const { reads } = secondOf(site, Math.round(ends - 1000));
      if (reads.length === 0) continue;
      batch += 1;
      const id = batch;
      const rows = reads.map(({ antenna, tag, readAt, rssi, count }, seq) => {
        return [id, seq, siteId, antenna, tag, readAt, rssi, count, null, 1, new Date()];
      });
      const places = rows.map(() => `(${Array(11).fill('?').join()})`).join();
      await writers.pool.query(`INSERT INTO bare_reads VALUES ${places}`, rows.flat());
      stored.set(id, performance.now());
    }
  };
  try {
    await Promise.all([poll(), ...senders.map(({ siteId }, site) => insert(site, siteId))]);
  } finally {
    await writers.close();
  }
  return delays;
}
