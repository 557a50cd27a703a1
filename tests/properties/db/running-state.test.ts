import type { PoolConnection } from 'mariadb';
import { expect, it } from 'vitest';
import type { Configuration } from '../../../server/domain/movements/configuration.js';
import type { Ledger } from '../../../server/domain/movements/history-of.js';
import { ingestReads } from '../../../server/ingest/ingest-reads.js';
import { ingestWheels } from '../../../server/ingest/ingest-wheels.js';
import { openDatabase, type Database } from '../../../server/lib/database.js';
import { createProjector } from '../../../server/projections/projector.js';
import { buildClock, buildContext } from '../../support/context.js';
import { testDatabaseUrl, useTestDatabase } from '../../support/database.js';
import { disorderedCase } from '../../support/disordered-ledger.js';
import { dumpDatabase } from '../../support/dump-database.js';
import { dumpOf } from '../../support/dump-history.js';
import { SeededRandom } from '../../support/seeded-random.js';
import { storeConfiguration } from '../../support/store-configuration.js';

const db = useTestDatabase();
const WRITERS = 8;
const READS = 2_000;
const RECEIVED_AT = new Date('2026-03-20T00:00:00Z');

it.each([71, 72, 73, 74, 75])(
  'equals history from the whole ledger: eight writers, disorder, repeats, projectors cut off (seed %i)',
  async (seed) => {
    const { configuration, ledger } = disorderedCase(seed, READS);
    await storeConfiguration(db, configuration);
    const portions = portionsOf(ledger, seed);
    let writing = true;
    const written = Promise.all(
      Array.from({ length: WRITERS }, (_, writer) =>
        write(
          db,
          configuration,
          portions.filter((_, index) => index % WRITERS === writer),
        ),
      ),
    ).finally(() => (writing = false));
    const projecting = openFused(db);
    const context = buildContext(projecting, { clock: buildClock(RECEIVED_AT.toISOString()) });
    const random = new SeededRandom(seed);
    let cutOff = 0;
    let projector = createProjector(buildContext(db));
    // A projector after another, each new to what the one before had done or half done.
    while (writing || (await projector.lagMs())) {
      projector = createProjector(context, { mostReads: 250 });
      projecting.burnAfter(random.chance(0.6) ? random.whole(1, 30) : 0);
      await projector.runOnce().then(
        () => projector.stop(),
        () => (cutOff += 1),
      );
      await db.pool.query('UPDATE worker_leases SET expires_at = NOW(3) - INTERVAL 1 SECOND');
    }
    await written;
    await createProjector(buildContext(db)).drain();
    await projecting.close();
    const dump = await dumpDatabase(db, configuration);
    expect(dump).toEqual(dumpOf(ledger, configuration));
    expect(dump.length).toBeGreaterThan(READS / 10);
    expect(cutOff).toBeGreaterThan(2);
  },
);

/** A connection of its own whose server ends it just before the n-th statement of a transaction. */
function openFused(killer: Database): Database & { burnAfter(statements: number): void } {
  const database = openDatabase(testDatabaseUrl(), { connections: 4 });
  const wired = new WeakSet<PoolConnection>();
  let left = 0;
  const take = database.pool.getConnection.bind(database.pool);
  database.pool.getConnection = async () => {
    const connection = await take();
    if (wired.has(connection)) return connection;
    wired.add(connection);
    const query = connection.query.bind(connection);
    connection.query = async (sql: string, values?: unknown) => {
      left -= 1;
      if (left === 0) await killer.pool.query('KILL CONNECTION ?', [connection.threadId]);
      return query(sql, values);
    };
    return connection;
  };
  return { ...database, burnAfter: (statements) => (left = statements) };
}

interface Portion {
  siteId: number;
  reads: Ledger['reads'];
  wheels: Ledger['wheels'];
}

/** The ledger in small portions of one site each, shuffled; a tenth of them come twice. */
function portionsOf(ledger: Ledger, seed: number): Portion[] {
  const random = new SeededRandom(seed);
  const portions: Portion[] = ledger.wheels.map((record) => ({
    siteId: 0,
    reads: [],
    wheels: [record],
  }));
  for (const siteId of new Set(ledger.reads.map((read) => read.siteId))) {
    const rest = random.shuffled(ledger.reads.filter((read) => read.siteId === siteId));
    while (rest.length) {
      portions.push({ siteId, reads: rest.splice(0, random.whole(1, 80)), wheels: [] });
    }
  }
  const again = portions.filter(() => random.chance(0.1));
  return random.shuffled([...portions, ...again]);
}

async function write(db: Database, configuration: Configuration, portions: readonly Portion[]) {
  const codeOf = (siteId: number) =>
    configuration.sites.find((site) => site.id === siteId)?.code as string;
  for (const { siteId, reads, wheels } of portions) {
    if (reads.length) {
      await ingestReads(db, {
        site: { id: siteId, code: codeOf(siteId) },
        reads: reads.map(({ antenna, tag, at }) => ({
          antenna,
          tag,
          readAt: new Date(at).toISOString(),
        })),
        receivedAt: RECEIVED_AT,
      });
    }
    for (const { readPointId, startedAt, endedAt, ...rest } of wheels) {
      const point = configuration.readPoints.find(({ id }) => id === readPointId);
      if (!point) throw new Error(`no read point ${readPointId}`);
      await ingestWheels(db, {
        site: { id: point.siteId, code: codeOf(point.siteId) },
        record: {
          site: codeOf(point.siteId),
          readPoint: point.code,
          startedAt: new Date(startedAt),
          endedAt: new Date(endedAt),
          axles: rest.axles,
          direction: rest.direction ?? undefined,
          speedKmh: rest.speedKmh ?? undefined,
        },
        receivedAt: RECEIVED_AT,
      });
    }
  }
}
