import { randomUUID } from 'node:crypto';
import { setTimeout as pause } from 'node:timers/promises';
import type { Context } from '../lib/context.js';
import { insertRows } from '../lib/bulk.js';
import { withTransaction } from '../lib/database.js';
import { dropLease, keepLease, LeaseLost, takeLease, type Lease } from '../lib/lease.js';
import { foldReads, resolveReads } from './fold-reads.js';
import { foldUnits } from './fold-units.js';
import { configurationVersion, loadNetwork, type LoadedNetwork } from './load-network.js';
import { takeWork } from './take-work.js';

const LEASE = 'projector';
/** What a killed worker's successor waits at most. */
const LEASE_SECONDS = 12;
const RENEW_MS = 4_000;
/** Reads a portion holds at most, about. */
const MOST_READS = 20_000;
const MOST_UNITS = 4_000;
const IDLE_MS = 100;
const RETRY_MS = 1_000;

/** What one portion came to; both 0 when nothing was to do or another worker is at it. */
export interface Portion {
  reads: number;
  units: number;
}

/**
 * Turns the ledger's queue into history: one worker at a time, whichever process it runs in. It
 * holds nothing that a restart would lose: effects and progress commit together.
 */
export class Projector {
  private readonly holder = randomUUID();
  private lease: { lease: Lease; takenAt: number } | null = null;
  private loaded: LoadedNetwork | null = null;
  private loop: Promise<void> | null = null;
  private running = false;

  constructor(
    private readonly context: Pick<Context, 'db' | 'logger' | 'liveEvents' | 'clock'>,
    private readonly mostReads: number,
  ) {}

  /** Folds one portion of the queue, then units that it or an earlier portion left dirty. */
  async runOnce(): Promise<Portion> {
    const lease = await this.holdLease();
    if (!lease) return { reads: 0, units: 0 };
    try {
      const reads = await this.foldQueue(lease);
      return { reads, units: await this.foldDirty(lease) };
    } catch (error) {
      this.loaded = null;
      this.lease = null;
      if (error instanceof LeaseLost) return { reads: 0, units: 0 };
      throw error;
    }
  }

  /** Works until queue and dirty units are empty, waiting for another worker where there is one. */
  async drain(onProgress?: (portion: Portion) => void): Promise<void> {
    for (;;) {
      const portion = await this.runOnce();
      onProgress?.(portion);
      if (portion.reads || portion.units) continue;
      if ((await this.lagMs()) === 0) return;
      await pause(IDLE_MS);
    }
  }

  start(): void {
    this.running = true;
    this.loop ??= this.work();
  }

  /** Ends after the portion in hand, and gives the lease back. */
  async stop(): Promise<void> {
    this.running = false;
    await this.loop;
    this.loop = null;
    if (this.lease) await dropLease(this.context.db, this.lease.lease);
    this.lease = null;
  }

  /** 0 when all is folded, else the age of the oldest thing waiting, ms (1 at least). */
  async lagMs(): Promise<number> {
    const [row] = await this.context.db.pool.query<{ oldest: Date | null; dirty: number }[]>(
      `SELECT (SELECT received_at FROM work ORDER BY id LIMIT 1) AS oldest,
         EXISTS (SELECT 1 FROM dirty_units) AS dirty`,
    );
    if (row?.oldest) {
      return Math.max(1, this.context.clock.now().getTime() - row.oldest.getTime());
    }
    return row?.dirty ? 1 : 0;
  }

  private async work(): Promise<void> {
    while (this.running) {
      try {
        const { reads, units } = await this.runOnce();
        if (!reads && !units) await pause(IDLE_MS);
      } catch (error) {
        this.context.logger.error({ err: error }, 'a portion could not be folded; trying again');
        await pause(RETRY_MS);
      }
    }
  }

  private async holdLease(): Promise<Lease | null> {
    const now = performance.now();
    if (!this.lease || now - this.lease.takenAt > RENEW_MS) {
      const lease = await takeLease(this.context.db, LEASE, this.holder, LEASE_SECONDS);
      this.lease = lease && { lease, takenAt: now };
    }
    return this.lease?.lease ?? null;
  }

  private async network(): Promise<LoadedNetwork> {
    const { pool } = this.context.db;
    if (this.loaded?.version !== (await configurationVersion(pool))) {
      this.loaded = await loadNetwork(pool);
    }
    return this.loaded;
  }

  private async foldQueue(lease: Lease): Promise<number> {
    const { db } = this.context;
    const work = await takeWork(db.pool, this.mostReads);
    if (!work) return 0;
    const loaded = await this.network();
    const usable = await resolveReads(db, loaded, work.reads);
    await withTransaction(db.pool, async (connection) => {
      await keepLease(connection, lease, LEASE_SECONDS);
      const dirty = await foldReads(connection, loaded, work, usable);
      const rows = [...dirty].map(([unitId, at]) => [unitId, new Date(at)]);
      await insertRows(connection, 'dirty_units', ['unit_id', 'from_at'], rows, [
        'from_at = LEAST(dirty_units.from_at, VALUES(from_at))',
      ]);
      await connection.query('DELETE FROM work WHERE id IN (?)', [work.ids]);
    });
    return Math.max(work.readCount, work.ids.length);
  }

  private async foldDirty(lease: Lease): Promise<number> {
    const { db, liveEvents } = this.context;
    const { network } = await this.network();
    const units = await withTransaction(db.pool, async (connection) => {
      await keepLease(connection, lease, LEASE_SECONDS);
      return foldUnits(connection, network, MOST_UNITS);
    });
    if (units.length) liveEvents.publish({ unitIds: units });
    return units.length;
  }
}

/** A projector over the context's database; a portion holds about `mostReads` reads. */
export function createProjector(
  context: Pick<Context, 'db' | 'logger' | 'liveEvents' | 'clock'>,
  { mostReads = MOST_READS }: { mostReads?: number } = {},
): Projector {
  return new Projector(context, mostReads);
}
