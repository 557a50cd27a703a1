import { ingestHandReports } from '../ingest/ingest-hand-reports.js';
import { ingestReads } from '../ingest/ingest-reads.js';
import { ingestReports } from '../ingest/ingest-reports.js';
import { ingestWheels } from '../ingest/ingest-wheels.js';
import type { Context } from '../lib/context.js';
import type { Database } from '../lib/database.js';
import { createProjector, type Projector } from '../projections/projector.js';
import {
  batchesOf,
  bySite,
  handReport,
  wheelRecord,
  wireRead,
  wireReport,
  type Batch,
} from './batches.js';
import { whoTells, type WhoTells } from './who-tells.js';
import { Traffic, type Sent } from './traffic.js';
import { world } from './world.js';

const HOUR = 3_600_000;
const DAY = 24 * HOUR;
const SLICE_MS = 6 * HOUR;
/** Sent again before the last stored read: what a site kept back when the process ended. */
const OVERLAP_MS = 6 * HOUR;

export interface SeedProgress {
  done: number;
  total: number;
  unit: 'hours of traffic' | 'reads taken up';
}

export interface SeedOptions {
  /** History reaches up to here. */
  until: Date;
  /** At most this many days back; 45 unless said otherwise. */
  days?: number;
  /** Takes in this part of the traffic alone; all of it unless said otherwise. */
  only?: (sent: Sent) => boolean;
  onProgress?: (progress: SeedProgress) => void;
}

/** What the demo's batches are stored under. */
interface Doors {
  sites: Map<string, { id: number; code: string }>;
  tellers: WhoTells;
}

/**
 * Gives the demo the traffic that it has not seen yet: from its last stored read (`days` back at
 * most) to `until`, through the function behind the ingest route, and lets the projector take it
 * all up. Run again it finds duplicates only. Returns how many reads were new.
 */
export async function seedTraffic(context: Context, options: SeedOptions): Promise<number> {
  const projector = createProjector(context);
  // It works beside the ingest, as in life: with two cores one folds while the other takes in.
  projector.start();
  try {
    const stored = await feedTraffic(context, options);
    await takeUp(context, projector, stored, options.onProgress ?? (() => undefined));
    return stored;
  } finally {
    // The server's own projector takes over, and would wait for this one's lease to expire.
    await projector.stop();
  }
}

/** The first half of `seedTraffic`: the reads are in the queue, and nothing is made of them yet. */
export async function feedTraffic(context: Context, options: SeedOptions): Promise<number> {
  const { until, days = 45, only = () => true, onProgress = () => undefined } = options;
  const doors = { sites: await demoSites(context.db), tellers: await whoTells(context.db) };
  const to = until.getTime();
  const last = await lastReceived(context.db, doors.sites);
  const from = Math.max(to - days * DAY, last === null ? 0 : last - OVERLAP_MS);
  const traffic = new Traffic();
  const total = Math.ceil((to - from) / HOUR);
  let stored = 0;
  for (let at = from; at < to; at += SLICE_MS) {
    const end = Math.min(at + SLICE_MS, to);
    const sent = traffic.between(at, end).filter(only);
    stored += await takeIn(context, doors, sent);
    onProgress({ done: Math.ceil((end - from) / HOUR), total, unit: 'hours of traffic' });
  }
  return stored;
}

async function takeIn(context: Context, doors: Doors, sent: ReturnType<Traffic['between']>) {
  const perSite = [...bySite(sent).values()].map(async (ofSite) => {
    let stored = 0;
    for (const batch of batchesOf(ofSite)) stored += await deliver(context, doors, batch);
    return stored;
  });
  const counts = await Promise.all(perSite);
  return counts.reduce((sum, count) => sum + count, 0);
}

/** Hands a batch to the function behind its door; returns how many reads of it were new. */
async function deliver({ db, env }: Context, doors: Doors, batch: Batch): Promise<number> {
  const site = doors.sites.get(batch.site);
  if (!site) return 0;
  const { retainMonths } = env;
  const received = { receivedAt: new Date(batch.deliveredAt), retainMonths };
  if (batch.kind === 'reads') {
    const answer = await ingestReads(db, { site, reads: batch.reads.map(wireRead), ...received });
    return answer.accepted + answer.held;
  }
  const { railroadId, clerkId } = doors.tellers;
  if (batch.kind === 'wheels') {
    await ingestWheels(db, { site, record: wheelRecord(batch.record), ...received });
  } else if (batch.kind === 'reports' && railroadId !== null) {
    const { source } = batch.reports[0] ?? { source: '' };
    const reports = batch.reports.map(wireReport);
    await ingestReports(db, { organisationId: railroadId, source, reports, ...received });
  } else if (batch.kind === 'hand' && clerkId !== null) {
    const { track } = batch.report;
    const reports = [handReport(batch.report)];
    const place = { siteId: site.id, personId: clerkId, track };
    await ingestHandReports(db, { ...place, reports, ...received });
  }
  return 0;
}

async function takeUp(
  context: Context,
  projector: Projector,
  total: number,
  onProgress: (progress: SeedProgress) => void,
): Promise<void> {
  // Its loop ends first, so that what it waits for here is its own work alone.
  await projector.stop();
  const look = setInterval(() => {
    void waiting(context.db).then(
      (left) => onProgress({ done: Math.max(0, total - left), total, unit: 'reads taken up' }),
      () => undefined,
    );
  }, 500);
  try {
    await projector.drain();
  } finally {
    clearInterval(look);
  }
  onProgress({ done: total, total, unit: 'reads taken up' });
}

async function waiting({ pool }: Database): Promise<number> {
  const [row] = await pool.query<{ waiting: number }[]>(
    'SELECT COALESCE(SUM(read_count), 0) AS waiting FROM work',
  );
  return row?.waiting ?? 0;
}

async function demoSites({ pool }: Database): Promise<Doors['sites']> {
  const codes = world.sites.map(({ code }) => code);
  const rows = await pool.query<{ id: number; code: string }[]>(
    'SELECT id, code FROM sites WHERE code IN (?)',
    [codes],
  );
  return new Map(rows.map((row) => [row.code, row]));
}

/** When the last batch of the demo's readers came in, in milliseconds; null before the first. */
async function lastReceived({ pool }: Database, sites: Doors['sites']): Promise<number | null> {
  const ids = [...sites.values()].map(({ id }) => id);
  if (ids.length === 0) return null;
  const [row] = await pool.query<{ received_at: Date }[]>(
    'SELECT received_at FROM `reads` WHERE site_id IN (?) ORDER BY batch_id DESC LIMIT 1',
    [ids],
  );
  return row?.received_at.getTime() ?? null;
}
