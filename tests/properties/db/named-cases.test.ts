import { expect, it } from 'vitest';
import type { Ledger } from '../../../server/domain/movements/history-of.js';
import { openDatabase } from '../../../server/lib/database.js';
import { createProjector } from '../../../server/projections/projector.js';
import { buildContext } from '../../support/context.js';
import { testDatabaseUrl, useTestDatabase } from '../../support/database.js';
import { disorderedCase } from '../../support/disordered-ledger.js';
import { dumpDatabase } from '../../support/dump-database.js';
import { dumpOf } from '../../support/dump-history.js';
import { expectSameHistory } from '../../support/expect-same-history.js';
import { storeConfiguration } from '../../support/store-configuration.js';
import { Trackside } from '../../support/trackside.js';
import { twoYards, type TwoYards } from '../../support/two-yards.js';
import { deliver, writeLedger } from '../../support/write-ledger.js';

const db = useTestDatabase();

/** Two yards in the database, and what was said beside their tracks so far. */
async function begin() {
  const world = twoYards('offsets');
  await storeConfiguration(db, world.configuration);
  const said: { reads: Ledger['reads'][number][]; wheels: Ledger['wheels'][number][] } = {
    reads: [],
    wheels: [],
  };
  const say = (ledger: Ledger) => {
    said.reads.push(...ledger.reads);
    said.wheels.push(...ledger.wheels);
  };
  return { world, said, say, report: () => new Trackside(world.configuration) };
}

type Begun = Awaited<ReturnType<typeof begin>>;

/** Sends, folds, and compares with what the whole ledger means. */
async function take({ world, said, say }: Begun, { ledger }: Trackside): Promise<void> {
  say(ledger);
  await deliver(db, world.configuration, ledger);
  await fold();
  await expectTruth(world, said);
}

async function fold(): Promise<void> {
  const projector = createProjector(buildContext(db));
  await projector.drain();
  await projector.stop();
}

async function expectTruth({ configuration }: TwoYards, ledger: Ledger): Promise<void> {
  expectSameHistory(await dumpDatabase(db, configuration), dumpOf(ledger, configuration));
}

async function passes(readPointId: number) {
  return db.pool.query<{ ordinal: number; direction: string; unit_count: number }[]>(
    `SELECT ordinal, direction, unit_count FROM passes WHERE read_point_id = ?
     ORDER BY started_at, ordinal`,
    [readPointId],
  );
}

it('pass merge: late cars between two passes make one of them', async () => {
  const begun = await begin();
  const { leadA } = begun.world;
  const apart = begun.report().cross(leadA, 'QTKX1', '10:00:00', 'increasing');
  await take(begun, apart.cross(leadA, 'QTKX2', '10:07:00', 'increasing'));
  expect(await passes(leadA.id)).toMatchObject([{ unit_count: 1 }, { unit_count: 1 }]);
  const between = begun.report().cross(leadA, 'QTKX3', '10:02:30', 'increasing');
  await take(begun, between.cross(leadA, 'QTKX4', '10:05:00', 'increasing'));
  expect(await passes(leadA.id)).toMatchObject([{ unit_count: 4 }]);
});

it('pass split: a late end-of-train device parts a pass in two', async () => {
  const begun = await begin();
  const { leadA } = begun.world;
  const together = begun.report().cross(leadA, 'QTKX1', '10:00:00', 'increasing');
  await take(begun, together.cross(leadA, 'QTKX2', '10:01:30', 'increasing'));
  expect(await passes(leadA.id)).toMatchObject([{ unit_count: 2 }]);
  await take(begun, begun.report().cross(leadA, 'QEOT7', '10:00:20', 'increasing'));
  expect(await passes(leadA.id)).toMatchObject([{ unit_count: 2 }, { unit_count: 1 }]);
});

it('pass split: a late car that turned back parts a pass at the cut', async () => {
  const begun = await begin();
  const { leadA } = begun.world;
  const there = begun.report().cross(leadA, 'QTKX1', '10:00:00', 'increasing');
  await take(begun, there.cross(leadA, 'QTKX2', '10:02:00', 'increasing'));
  await take(begun, begun.report().cross(leadA, 'QTKX3', '10:01:00', 'decreasing'));
  expect(await passes(leadA.id)).toMatchObject([
    { direction: 'increasing', unit_count: 1 },
    { direction: 'decreasing', unit_count: 1 },
    { direction: 'increasing', unit_count: 1 },
  ]);
});

it.each([
  ['the one way', ['QTKX1', 'QTKX2', 'QTKX3']],
  ['the other', ['QTKX3', 'QTKX2', 'QTKX1']],
] as const)('ties in time: whatever comes first, %s', async (_, order) => {
  const begun = await begin();
  const { leadA, line, leadB } = begun.world;
  for (const unit of order) {
    const direction = unit === 'QTKX1' ? 'increasing' : 'decreasing';
    const track = begun.report().cross(leadA, unit, '10:00:00', direction);
    // Nobody is at three places at once; which of them counts first must not hang on the order.
    track.read(line, 0, unit, '10:00:00').read(leadB, 0, unit, '10:00:00');
    await take(begun, track);
  }
  const starting = await passes(leadA.id);
  expect(starting.map(({ ordinal }) => ordinal)).toEqual([0, 1]);
  expect(starting.map(({ unit_count: units }) => units).sort()).toEqual([1, 2]);
});

it('late commit: a batch that is committed after later ones were folded is not lost', async () => {
  const begun = await begin();
  const { world, say } = begun;
  const early = begun.report().cross(world.leadA, 'QTKX1', '10:00:00', 'increasing').ledger;
  let open: () => void = () => undefined;
  const gate = new Promise<void>((resolve) => (open = resolve));
  const slow = openDatabase(testDatabaseUrl(), { connections: 1 });
  const atCommit = new Promise<void>((reached) => {
    const getConnection = slow.pool.getConnection.bind(slow.pool);
    slow.pool.getConnection = async () => {
      const connection = await getConnection();
      const commit = connection.commit.bind(connection);
      connection.commit = async () => {
        reached();
        await gate;
        await commit();
      };
      return connection;
    };
  });
  const sending = deliver(slow, world.configuration, early);
  await atCommit;
  await take(begun, begun.report().cross(world.leadA, 'QTKX2', '10:01:00', 'increasing'));
  expect(await passes(world.leadA.id)).toMatchObject([{ unit_count: 1 }]);
  const [last] = await db.pool.query<{ batch: number }[]>(
    'SELECT MAX(batch_id) AS batch FROM `reads`',
  );
  open();
  await sending;
  await slow.close();
  const [late] = await db.pool.query<{ id: number }[]>('SELECT MIN(id) AS id FROM work');
  expect(late?.id).toBeLessThan(last?.batch as number);
  await fold();
  say(early);
  await expectTruth(world, begun.said);
  expect(await passes(world.leadA.id)).toMatchObject([{ unit_count: 2 }]);
});

it('two workers: each takes the lease from the other in mid-portion, and nothing is done twice', async () => {
  const { configuration, ledger } = disorderedCase(4711, 1_500);
  await storeConfiguration(db, configuration);
  let busy = true;
  const written = writeLedger(configuration, ledger, 4711).finally(() => (busy = false));
  const onlooker = createProjector(buildContext(db));
  const databases = [0, 1].map(() => openDatabase(testDatabaseUrl(), { connections: 4 }));
  const workers = databases.map((own) => createProjector(buildContext(own), { mostReads: 100 }));
  const done = [0, 0];
  const work = async (worker: number) => {
    const { reads = 0, units = 0 } = (await workers[worker]?.runOnce()) ?? {};
    if (reads || units) done[worker] = (done[worker] ?? 0) + 1;
  };
  // In turns one begins, and its time runs out while the other begins, too.
  for (let turn = 0; busy || (await onlooker.lagMs()); turn += 1) {
    const first = work(turn % 2);
    await db.pool.query('UPDATE worker_leases SET expires_at = NOW(3) - INTERVAL 1 SECOND');
    await Promise.all([first, work(1 - (turn % 2))]);
    await db.pool.query('UPDATE worker_leases SET expires_at = NOW(3) - INTERVAL 1 SECOND');
  }
  await written;
  await Promise.all(workers.map((worker) => worker.stop()));
  await Promise.all(databases.map((own) => own.close()));
  expectSameHistory(await dumpDatabase(db, configuration), dumpOf(ledger, configuration));
  expect(Math.min(...done)).toBeGreaterThan(0);
});
