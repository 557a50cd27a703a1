import { beforeEach, describe, expect, test } from 'vitest';
import { createApp } from '../../server/app.js';
import { ingestReads } from '../../server/ingest/ingest-reads.js';
import { modelsOf } from '../../server/models/index.js';
import type { Site } from '../../server/models/site.js';
import { createProjector } from '../../server/projections/projector.js';
import { buildContext } from '../support/context.js';
import { useTestDatabase } from '../support/database.js';
import { buildPerson, signIn } from '../support/factories.js';
import { carTag } from '../support/ingest.js';
import { enterLine, lead, onLine, storePoint } from '../support/line-between-yards.js';

const db = useTestDatabase();
const context = buildContext(db);
const app = createApp(context, { clientDirectory: null });
type Agent = Awaited<ReturnType<typeof signIn>>;
let admin: Agent;

let line: Site;
let east: Site;
const CARS = [1, 2, 3];
const at = (minute: number) => Date.parse('2026-11-02T10:00:00Z') + minute * 60_000;
const lines = { decreasingToward: ['FORK'], increasingToward: ['EAST'] };
const unknown = { direction: 'unknown', directionBasis: null };

/** One antenna on the line and one on the lead of the east yard: no read tells a direction. */
beforeEach(async () => {
  context.clock.set('2026-11-03T00:00:00Z');
  admin = await signIn(app, await buildPerson(db));
  await enterLine(admin);
  await store(onLine);
  await store({ ...lead, site: 'EAST', increasingPlace: { site: 'EAST' } });
  const antenna = { number: 1, offsetM: 0, side: 'left' };
  const antennas = [
    { ...antenna, site: 'LINE', readPoint: 'M' },
    { ...antenna, site: 'EAST', readPoint: 'N' },
  ];
  await admin.post('/api/antennas').send(antennas).expect(200);
  [line, east] = await Promise.all([siteOf('LINE'), siteOf('EAST')]);
});

const siteOf = (code: string) =>
  modelsOf(db.sequelize).Site.findOne({ where: { code }, rejectOnEmpty: true });

const store = (point: object) => storePoint(admin, point);

/** The cars go by the line at minute 0 and enter the east yard four hours later. */
async function runTrain(): Promise<void> {
  await read(line, 0);
  await read(east, 240);
  await drain();
}

async function read(site: Site, minute: number): Promise<void> {
  await ingestReads(db, {
    site: { id: site.id, code: site.code },
    reads: CARS.map((car, index) => ({
      antenna: 1,
      tag: carTag(car),
      readAt: new Date(at(minute) + index * 5_000).toISOString(),
    })),
    receivedAt: context.clock.now(),
  });
}

async function drain(): Promise<void> {
  const projector = createProjector(context);
  await projector.drain();
  await projector.stop();
}

/** What is told of the pass over the line. */
async function told(): Promise<{ direction: string; directionBasis: string | null }> {
  const id = `LINE-M-${at(0).toString(36)}`;
  const { body } = await admin.get(`/api/passes/${id}`).expect(200);
  expect(body.data.units).toHaveLength(CARS.length);
  const { direction, directionBasis } = body.data;
  return { direction, directionBasis };
}

async function planned() {
  return db.pool.query<{ label: string; code: string; since_at: Date; until_at: Date }[]>(
    `SELECT r.label, rp.code, s.since_at, s.until_at FROM rebuilds r
       JOIN rebuild_spans s ON s.rebuild_id = r.id JOIN read_points rp ON rp.id = s.read_point_id
     WHERE r.state = 'waiting' ORDER BY rp.code`,
  );
}

describe('history', () => {
  test('tells no direction while nobody knows the lines', async () => {
    await runTrain();
    expect(await told()).toEqual(unknown);
  });

  test('tells direction by where the cars were next once the lines are known', async () => {
    await store({ ...onLine, ...lines });
    await runTrain();
    expect(await told()).toEqual({ direction: 'increasing', directionBasis: 'history' });
  });

  test('tells it the other way round where the lines are given so', async () => {
    await store({ ...onLine, decreasingToward: ['EAST'], increasingToward: ['FORK'] });
    await runTrain();
    expect(await told()).toEqual({ direction: 'decreasing', directionBasis: 'history' });
  });

  test('is planned to be made anew from the first pass there to the last, cars and all', async () => {
    await runTrain();
    await store({ ...onLine, ...lines });
    expect(await planned()).toEqual([
      {
        label: 'Lines at read point M at LINE changed',
        code: 'M',
        since_at: new Date(at(-30)),
        until_at: new Date(at(30) + 10_000),
      },
    ]);
    const dirty = await db.pool.query(
      `SELECT unit_key AS unit FROM dirty_units d JOIN units u ON u.id = d.unit_id
       WHERE d.lane = 1 ORDER BY unit_key`,
    );
    expect(dirty).toEqual(CARS.map((car) => ({ unit: `QTKX${car}` })));
  });

  test('is made anew when the lines become known, turn, or are taken away', async () => {
    await runTrain();
    await store({ ...onLine, ...lines });
    await drain();
    expect(await told()).toEqual({ direction: 'increasing', directionBasis: 'history' });
    await store({ ...onLine, decreasingToward: ['EAST'], increasingToward: ['FORK'] });
    await drain();
    expect(await told()).toEqual({ direction: 'decreasing', directionBasis: 'history' });
    await store({ ...onLine, decreasingToward: [], increasingToward: [] });
    await drain();
    expect(await told()).toEqual(unknown);
    expect(await planned()).toEqual([]);
  });

  test('stays as it is where the lines do, in whatever order they come', async () => {
    await runTrain();
    const wide = { decreasingToward: ['FORK', 'WEST'], increasingToward: ['EAST'] };
    await store({ ...onLine, ...wide });
    expect(await planned()).toHaveLength(1);
    await drain();
    await store({ ...onLine, ...wide });
    await store({ ...onLine, decreasingToward: ['WEST', 'FORK'] });
    await store({ ...onLine, name: 'Other' });
    expect(await planned()).toEqual([]);
    expect(await db.pool.query('SELECT unit_id FROM dirty_units')).toEqual([]);
  });
});
