import { randomUUID } from 'node:crypto';
import type { PoolConnection } from 'mariadb';
import { setTimeout as pause } from 'node:timers/promises';
import { LANES, MOST_LATE_READS, type Lane } from '../domain/lanes.js';
import type { Context } from '../lib/context.js';
import { insertRows } from '../lib/bulk.js';
import { withTransaction } from '../lib/database.js';
import { dropLease, keepLease, LeaseLost, takeLease, type Lease } from '../lib/lease.js';
import { foldReads, resolveReads, resolveReports } from './fold-reads.js';
import { foldUnits } from './fold-units.js';
import {
  ConfigurationChanged,
  configurationVersion,
  holdConfiguration,
  loadNetwork,
  type LoadedNetwork,
} from './load-network.js';
import { foldSlice, loadSlice } from './rebuild-slice.js';
import { syncHeld } from './sync-held.js';
import { advanceRebuild, frozenBefore, takeRebuild } from './take-rebuild.js';
import { takeWork } from './take-work.js';

const LEASE = 'projector';
/** What a killed worker's successor waits at most. */
const LEASE_SECONDS = 12;
const RENEW_MS = 4_000;
/** Reads a portion holds at most, about. */
const MOST_READS = 20_000;
const MOST_UNITS = 4_000;
/** Of what came late only so much at a time, so that what comes now never waits long. */
const LATE_UNITS = 500;
const IDLE_MS = 100;
const RETRY_MS = 1_000;

/** What one portion came to; all 0 when nothing was to do or another worker is at it. */
export interface Portion {
  /** Reads, wheel records and reports taken up. */
  reads: number;
  /** Units folded. */
  units: number;
  /** Slices of history made anew. */
  slices: number;
}

const NOTHING: Portion = { reads: 0, units: 0, slices: 0 };

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

  /**
   * Folds a portion of what is said now, a slice of what was said late, and units that these or
   * earlier portions left dirty; with time left over, a slice of what is being made anew.
   */
  async runOnce(): Promise<Portion> {
    const lease = await this.holdLease();
    if (!lease) return NOTHING;
    try {
      const live = await this.foldQueue(lease, LANES.live, this.mostReads);
      const late = await this.foldQueue(lease, LANES.late, MOST_LATE_READS);
      const units = await this.foldDirty(lease);
      const slices = live < this.mostReads / 2 && late === 0 ? await this.rebuild(lease) : 0;
      return { reads: live + late, units, slices };
    } catch (error) {
      this.loaded = null;
      this.lease = null;
      if (error instanceof LeaseLost) return NOTHING;
      if (error instanceof ConfigurationChanged) return this.runOnce();
      throw error;
    }
  }

  /** Works until nothing is left to do, waiting for another worker where there is one. */
  async drain(onProgress?: (portion: Portion) => void): Promise<void> {
    for (;;) {
      const portion = await this.runOnce();
      onProgress?.(portion);
      if (portion.reads || portion.units || portion.slices) continue;
      const { pool } = this.context.db;
      if ((await this.lagMs()) === 0 && (await takeRebuild(pool)) === null) return;
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
        const { reads, units, slices } = await this.runOnce();
        if (!reads && !units && !slices) await pause(IDLE_MS);
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

  private async foldQueue(lease: Lease, lane: Lane, mostReads: number): Promise<number> {
    const { db } = this.context;
    const work = await takeWork(db.pool, lane, mostReads);
    if (!work) return 0;
    const loaded = await this.network();
    const usable = await resolveReads(db, loaded, work.reads);
    const reported = await resolveReports(db, loaded, work.reports);
    const frozen = work.wheels.length ? await frozenBefore(db.pool) : 0;
    const wheels = work.wheels.filter(({ since }) => since >= frozen);
    await withTransaction(db.pool, async (connection) => {
      await keepLease(connection, lease, LEASE_SECONDS);
      await holdConfiguration(connection, loaded.version);
      await syncHeld(connection, loaded, work.reads, { all: false });
      const changes = await foldReads(connection, loaded, wheels, usable);
      for (const { unitId, at } of reported) changes.unit(unitId, at);
      await markDirty(connection, changes.dirty, lane);
      await connection.query('DELETE FROM work WHERE id IN (?)', [work.ids]);
    });
    return Math.max(work.readCount, work.ids.length);
  }

  private async foldDirty(lease: Lease): Promise<number> {
    const { db, liveEvents } = this.context;
    const loaded = await this.network();
    const units = await withTransaction(db.pool, async (connection) => {
      await keepLease(connection, lease, LEASE_SECONDS);
      await holdConfiguration(connection, loaded.version);
      return [
        ...(await foldUnits(connection, loaded.network, LANES.live, MOST_UNITS)),
        ...(await foldUnits(connection, loaded.network, LANES.late, LATE_UNITS)),
      ];
    });
    if (units.length) liveEvents.publish({ unitIds: units });
    return units.length;
  }

  private async rebuild(lease: Lease): Promise<number> {
    const { db, clock } = this.context;
    const span = await takeRebuild(db.pool);
    if (!span) return 0;
    const loaded = await this.network();
    const { network } = loaded;
    const point = network.readPoints.get(span.readPointId);
    const now = clock.now();
    if (!point) {
      await withTransaction(db.pool, async (connection) => {
        await keepLease(connection, lease, LEASE_SECONDS);
        await advanceRebuild(connection, span, { reached: span.untilAt, now });
      });
      return 1;
    }
    const frozen = await frozenBefore(db.pool);
    const bounds = { from: span.nextAt, until: span.untilAt, frozen };
    const slice = await loadSlice(db.pool, network, point, bounds);
    const usable = await resolveReads(db, loaded, slice.reads);
    await withTransaction(db.pool, async (connection) => {
      await keepLease(connection, lease, LEASE_SECONDS);
      await holdConfiguration(connection, loaded.version);
      await syncHeld(connection, loaded, slice.reads, { all: true });
      const changes = await foldSlice(connection, network, point, slice, usable);
      await markDirty(connection, changes.dirty, LANES.late);
      await advanceRebuild(connection, span, { reached: slice.to, now });
    });
    return 1;
  }
}

async function markDirty(
  connection: PoolConnection,
  dirty: ReadonlyMap<number, number>,
  lane: Lane,
): Promise<void> {
  const rows = [...dirty].sort(([a], [b]) => a - b).map(([id, at]) => [id, new Date(at), lane]);
  await insertRows(connection, 'dirty_units', ['unit_id', 'from_at', 'lane'], rows, [
    'from_at = LEAST(dirty_units.from_at, VALUES(from_at))',
    'lane = LEAST(dirty_units.lane, VALUES(lane))',
  ]);
}

/** A projector over the context's database; a portion holds about `mostReads` reads. */
export function createProjector(
  context: Pick<Context, 'db' | 'logger' | 'liveEvents' | 'clock'>,
  { mostReads = MOST_READS }: { mostReads?: number } = {},
): Projector {
  return new Projector(context, mostReads);
}
