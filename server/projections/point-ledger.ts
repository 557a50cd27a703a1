import type { Pool } from 'mariadb';
import type { Network, ReadPointConfiguration } from '../domain/movements/configuration.js';
import { READ_COLUMNS, type ReadRow } from './load-reads.js';

/** How many reads are looked at together in search of a quiet moment. */
const LOOK_AT = 500;

/** The reads of one read point, and of antennas of its site that nobody has set up. */
export class PointLedger {
  private numbers: number[] | null = null;
  private readonly gapMs: number;

  constructor(
    private readonly pool: Pool,
    private readonly network: Network,
    private readonly point: ReadPointConfiguration,
  ) {
    this.gapMs = point.visitGapSeconds * 1000;
  }

  /** The reads from `from` to before `until` (ms), the first `most` of them, in order of time. */
  async reads(from: number, until: number, most = Number.MAX_SAFE_INTEGER): Promise<ReadRow[]> {
    const rows: ReadRow[] = [];
    for (const number of await this.antennas()) {
      const found = await this.pool.query<ReadRow[]>(
        `SELECT ${READ_COLUMNS} FROM \`reads\`
         WHERE site_id = ? AND antenna_no = ? AND read_at >= ? AND read_at < ?
         ORDER BY read_at LIMIT ?`,
        [this.point.siteId, number, new Date(from), new Date(until), most],
      );
      for (const row of found) rows.push(row);
    }
    return rows.sort((a, b) => a.read_at.getTime() - b.read_at.getTime()).slice(0, most);
  }

  /** The last instant up to `at` that no visit reaches over, in the ledger or as stored. */
  async quietBefore(at: number): Promise<number> {
    for (let quiet = at; ;) {
      const times = await this.times(quiet, '<');
      let next = quiet;
      for (const time of times) {
        if (next - time > this.gapMs) break;
        next = time;
      }
      const across = await this.across(next);
      if (across) next = Math.min(next, across.firstAt);
      if (next === quiet) return quiet;
      quiet = next;
    }
  }

  /** The first instant from `at` on that no visit reaches over, in the ledger or as stored. */
  async quietAfter(at: number): Promise<number> {
    for (let quiet = at; ;) {
      const [before] = await this.times(quiet, '<', 1);
      let reached = before ?? -Infinity;
      for (const time of await this.times(quiet, '>=')) {
        if (time - reached > this.gapMs) break;
        reached = time;
      }
      let next = Math.max(quiet, reached + 1);
      const across = await this.across(next);
      if (across) next = Math.max(next, across.lastAt + 1);
      if (next === quiet) return quiet;
      quiet = next;
    }
  }

  /** Times of the reads next before or from `at` on, the nearest first. */
  private async times(at: number, than: '<' | '>=', most = LOOK_AT): Promise<number[]> {
    const back = than === '<';
    const found: number[] = [];
    for (const number of await this.antennas()) {
      const rows = await this.pool.query<{ read_at: Date }[]>(
        `SELECT read_at FROM \`reads\`
         WHERE site_id = ? AND antenna_no = ? AND read_at ${than} ?
         ORDER BY read_at ${back ? 'DESC' : 'ASC'} LIMIT ?`,
        [this.point.siteId, number, new Date(at), most],
      );
      for (const row of rows) found.push(row.read_at.getTime());
    }
    return found.sort((a, b) => (back ? b - a : a - b)).slice(0, most);
  }

  /** What is stored as one visit although it begins before `at` and ends after it. */
  private async across(at: number): Promise<{ firstAt: number; lastAt: number } | null> {
    const [row] = await this.pool.query<{ first_at: Date | null; last_at: Date | null }[]>(
      `SELECT MIN(first_at) AS first_at, MAX(last_at) AS last_at FROM passages
       WHERE read_point_id = ? AND last_at >= ? AND first_at < ?`,
      [this.point.id, new Date(at), new Date(at)],
    );
    if (!row?.first_at || !row.last_at) return null;
    return { firstAt: row.first_at.getTime(), lastAt: row.last_at.getTime() };
  }

  private async antennas(): Promise<number[]> {
    if (this.numbers) return this.numbers;
    const { siteId, id } = this.point;
    // With the site among what is asked for, the natural key takes one step for each number.
    const heard = await this.pool.query<{ antenna_no: number }[]>(
      'SELECT DISTINCT site_id, antenna_no FROM `reads` WHERE site_id IN (?)',
      [[siteId]],
    );
    this.numbers = heard
      .map((row) => row.antenna_no)
      .filter((number) => (this.network.antenna(siteId, number)?.readPointId ?? id) === id);
    return this.numbers;
  }
}
