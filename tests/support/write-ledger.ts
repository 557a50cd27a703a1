import { v5 } from 'uuid';
import type { Configuration } from '../../server/domain/movements/configuration.js';
import type { Ledger, LedgerReport } from '../../server/domain/movements/history-of.js';
import { ingestHandReports } from '../../server/ingest/ingest-hand-reports.js';
import { ingestReads } from '../../server/ingest/ingest-reads.js';
import { ingestReports } from '../../server/ingest/ingest-reports.js';
import { ingestWheels } from '../../server/ingest/ingest-wheels.js';
import { openDatabase, type Database } from '../../server/lib/database.js';
import { testDatabaseUrl } from './database.js';
import { SeededRandom } from './seeded-random.js';

const WRITERS = 8;
const MOST_READS = 80;
const SENT_TWICE = 0.1;
/** Of the portions so many come in as they happen, the others long after. */
const LIVE = 0.5;
const MINUTE_MS = 60_000;

/** After everything that a generated ledger says. */
export const RECEIVED_AT = new Date('2026-06-30T00:00:00Z');

interface Portion {
  siteId: number;
  reads: Ledger['reads'];
  wheels: Ledger['wheels'];
  reports?: readonly LedgerReport[];
  receivedAt: Date;
}

/**
 * Sends a ledger through the doors by eight connections at once: portions of one site each,
 * shuffled, a tenth of them twice, half of them live and half late.
 */
export async function writeLedger(
  configuration: Configuration,
  ledger: Ledger,
  seed: number,
): Promise<void> {
  const portions = portionsOf(ledger, new SeededRandom(seed));
  await Promise.all(
    Array.from({ length: WRITERS }, async (_, writer) => {
      const db = openDatabase(testDatabaseUrl(), { connections: 1 });
      const own = portions.filter((_portion, index) => index % WRITERS === writer);
      try {
        for (const portion of own) await write(db, configuration, portion);
      } finally {
        await db.close();
      }
    }),
  );
}

function portionsOf(ledger: Ledger, random: SeededRandom): Portion[] {
  const portions = ledger.wheels.map((record) => portion(random, 0, [], [record]));
  for (const report of ledger.reports ?? []) {
    portions.push({ ...portion(random, 0, [], []), reports: [report] });
  }
  for (const siteId of new Set(ledger.reads.map((read) => read.siteId))) {
    const own = ledger.reads.filter((read) => read.siteId === siteId);
    const rest = random.chance(0.5) ? random.shuffled(own) : nearlyInOrder(own, random);
    while (rest.length) {
      portions.push(portion(random, siteId, rest.splice(0, random.whole(1, MOST_READS)), []));
    }
  }
  const again = portions.filter(() => random.chance(SENT_TWICE));
  return random.shuffled([...portions, ...again]);
}

function nearlyInOrder(reads: Ledger['reads'], random: SeededRandom) {
  return reads
    .map((read) => ({ read, key: read.at + (random.chance(0.1) ? random.between(0, 1e8) : 0) }))
    .sort((a, b) => a.key - b.key)
    .map(({ read }) => read);
}

function portion(
  random: SeededRandom,
  siteId: number,
  reads: Ledger['reads'],
  wheels: Ledger['wheels'],
): Portion {
  const latest = Math.max(...reads.map((read) => read.at), ...wheels.map((w) => w.endedAt));
  const live = new Date(latest + random.whole(0, 2) * MINUTE_MS);
  return { siteId, reads, wheels, receivedAt: random.chance(LIVE) ? live : RECEIVED_AT };
}

/** Sends these facts through the doors, one request for each site and wheel record. */
export async function deliver(
  db: Database,
  configuration: Configuration,
  ledger: Ledger,
  receivedAt = RECEIVED_AT,
): Promise<void> {
  for (const siteId of new Set(ledger.reads.map((read) => read.siteId))) {
    const reads = ledger.reads.filter((read) => read.siteId === siteId);
    await write(db, configuration, { siteId, reads, wheels: [], receivedAt });
  }
  await write(db, configuration, { siteId: 0, reads: [], wheels: ledger.wheels, receivedAt });
}

async function write(db: Database, configuration: Configuration, portion: Portion): Promise<void> {
  const { siteId, reads, wheels, receivedAt } = portion;
  for (const report of portion.reports ?? []) await say(db, configuration, report);
  if (reads.length) {
    const sent = reads.map(({ antenna, tag, at }) => {
      return { antenna, tag, readAt: new Date(at).toISOString() };
    });
    await ingestReads(db, { site: siteOf(configuration, siteId), reads: sent, receivedAt });
  }
  for (const { readPointId, startedAt, endedAt, ...rest } of wheels) {
    const point = configuration.readPoints.find(({ id }) => id === readPointId);
    if (!point) throw new Error(`no read point ${readPointId}`);
    const site = siteOf(configuration, point.siteId);
    const record = {
      site: site.code,
      readPoint: point.code,
      startedAt: new Date(startedAt),
      endedAt: new Date(endedAt),
      axles: rest.axles,
      direction: rest.direction ?? undefined,
      speedKmh: rest.speedKmh ?? undefined,
    };
    await ingestWheels(db, { site, record, receivedAt });
  }
}

/** A report always under the same reference or id, so that sent twice it is one. */
async function say(
  db: Database,
  configuration: Configuration,
  { identity, event, at, siteId, track, basis }: LedgerReport,
): Promise<void> {
  const reference = [identity, event, at, siteId, track].join(' ');
  const bounds = { receivedAt: RECEIVED_AT, retainMonths: 13 };
  if (basis === 'report') {
    const site = siteOf(configuration, siteId).code;
    const report = { reference, unit: identity, event, at: new Date(at).toISOString(), site };
    await ingestReports(db, { organisationId: 1, source: 'test', reports: [report], ...bounds });
    return;
  }
  const seen = event === 'seen';
  const report = { id: v5(reference, v5.URL), unit: identity, at: new Date(at), seen };
  await ingestHandReports(db, { siteId, personId: 1, track, reports: [report], ...bounds });
}

function siteOf(configuration: Configuration, id: number): { id: number; code: string } {
  const site = configuration.sites.find((candidate) => candidate.id === id);
  if (!site) throw new Error(`no site ${id}`);
  return { id, code: site.code };
}
