import { beforeEach, describe, expect, test } from 'vitest';
import { createApp } from '../../server/app.js';
import { ingestReads } from '../../server/ingest/ingest-reads.js';
import { modelsOf } from '../../server/models/index.js';
import type { Site } from '../../server/models/site.js';
import { createProjector } from '../../server/projections/projector.js';
import { buildContext } from '../support/context.js';
import { useTestDatabase } from '../support/database.js';
import { buildPerson, buildReadPoint, signIn } from '../support/factories.js';
import { carTag } from '../support/ingest.js';

const db = useTestDatabase();
const context = buildContext(db);
const app = createApp(context, { clientDirectory: null });
type Agent = Awaited<ReturnType<typeof signIn>>;
let admin: Agent;

const place = { latitude: 45, longitude: -93, timeZone: 'UTC' };
const yard = (code: string) => ({ code, name: code, kind: 'yard', ...place });
const edge = (from: string, to: string) => ({
  from,
  to,
  railMetres: 40_000,
  kind: 'rail',
  line: 'Main',
});
const onLine = {
  site: 'LINE',
  code: 'M',
  name: 'Main track',
  kind: 'line',
  decreasingPlace: null,
  increasingPlace: null,
};
const lead = { ...onLine, code: 'N', increasingPlace: { site: 'LINE' } };
const spot = { site: 'LINE', code: 'DOCK', name: 'Dock', kind: 'spot' };

/** West yard – 40 km – junction – 40 km – the line – 40 km – east yard. */
beforeEach(async () => {
  context.clock.set('2026-11-03T00:00:00Z');
  admin = await signIn(app, await buildPerson(db));
  const sites = [yard('WEST'), { ...yard('LINE'), kind: 'line' }, yard('EAST')];
  await admin.post('/api/sites').send(sites).expect(200);
  const nodes = [{ code: 'FORK', name: 'Fork', latitude: 45, longitude: -93 }];
  const edges = [edge('WEST', 'FORK'), edge('FORK', 'LINE'), edge('LINE', 'EAST')];
  await admin.post('/api/routes').send({ nodes, edges }).expect(200);
});

interface Lines {
  decreasingToward: string[];
  increasingToward: string[];
}

async function store(point: object): Promise<Lines> {
  const { body } = await admin.post('/api/read-points').send(point).expect(200);
  const { decreasingToward, increasingToward } = body.data;
  return { decreasingToward, increasingToward };
}

async function faultsOf(sent: object): Promise<[pointer: string, detail: string][]> {
  const { body } = await admin.post('/api/read-points').send(sent).expect(400);
  return body.errors.map((fault: { pointer: string; detail: string }) => [
    fault.pointer,
    fault.detail,
  ]);
}

describe('the lines at a read point', () => {
  test('are stored, answered, listed, and stay when they are left out', async () => {
    expect(await store(onLine)).toEqual({ decreasingToward: [], increasingToward: [] });
    const lines = { decreasingToward: ['FORK'], increasingToward: ['EAST', 'WEST'] };
    expect(await store({ ...onLine, ...lines })).toEqual(lines);
    const { decreasingPlace, increasingPlace, ...rest } = onLine;
    expect(await store(rest)).toEqual(lines);
    expect(await store({ ...onLine, increasingToward: ['EAST'] })).toEqual({
      decreasingToward: ['FORK'],
      increasingToward: ['EAST'],
    });
    const one = await admin.get('/api/read-points/LINE/M').expect(200);
    expect(one.body.data).toMatchObject({ decreasingToward: ['FORK'], increasingToward: ['EAST'] });
    const list = await admin.get('/api/read-points').expect(200);
    expect(list.body.data).toEqual([one.body.data]);
    expect(await store({ ...onLine, decreasingToward: [] })).toEqual({
      decreasingToward: [],
      increasingToward: ['EAST'],
    });
  });

  test('what is answered can be sent back, of every kind of read point', async () => {
    const sent = [{ ...onLine, decreasingToward: ['FORK'] }, lead, spot];
    const { body } = await admin.post('/api/read-points').send(sent).expect(200);
    const again = await admin.post('/api/read-points').send(body.data).expect(200);
    expect(again.body).toEqual(body);
  });

  test('go with the side that becomes a site, and with the line that becomes a spot', async () => {
    const lines = { decreasingToward: ['FORK'], increasingToward: ['EAST'] };
    await store({ ...onLine, ...lines });
    const none = { decreasingToward: [], increasingToward: [] };
    const walled = { ...onLine, increasingPlace: { site: 'LINE' } };
    expect(await store(walled)).toEqual({ ...lines, increasingToward: [] });
    expect(await store(onLine)).toEqual({ ...lines, increasingToward: [] });
    const { site, code, name } = onLine;
    expect(await store({ site, code, name, kind: 'spot' })).toEqual(none);
  });
});

describe('a row as seeders write it', () => {
  test.each([undefined, {}, { increasing: ['EAST'] }])('%o', async (toward) => {
    const site = await modelsOf(db.sequelize).Site.findOne({ where: { code: 'LINE' } });
    if (!site) throw new Error('The line is not there.');
    const row = { site, code: 'M', increasingSite: null, ...(toward && { toward }) };
    const built = await buildReadPoint(db, row);
    const { toward: before } = await built.reload();
    const lines = { decreasingToward: [], increasingToward: toward?.increasing ?? [] };
    expect(await store({ ...onLine, ...lines })).toEqual(lines);
    expect((await built.reload()).toward).toBe(before);
  });
});

describe('faults', () => {
  test('of what is no list of codes', async () => {
    const many = Array.from({ length: 21 }, (_, index) => `N${index}`);
    const faults = await faultsOf([
      { ...onLine, decreasingToward: 'FORK', increasingToward: ['EAST', 'fork', ''] },
      { ...onLine, code: 'B', decreasingToward: many, increasingToward: ['EAST', 'EAST'] },
      { ...onLine, code: 'C', decreasingToward: null, increasingToward: [7, 'A'.repeat(17)] },
    ]);
    expect(faults.map(([pointer]) => pointer)).toEqual([
      '/0/decreasingToward',
      '/0/increasingToward/1',
      '/0/increasingToward/2',
      '/1/decreasingToward',
      '/1/increasingToward',
      '/2/decreasingToward',
      '/2/increasingToward/0',
      '/2/increasingToward/1',
    ]);
    expect(faults[4]?.[1]).toBe('must not name one twice');
  });

  test('of nodes that are not on the route graph, and of its own', async () => {
    const sent = [{ ...onLine, decreasingToward: ['LINE'], increasingToward: ['EAST', 'NOWHERE'] }];
    expect(await faultsOf(sent)).toEqual([
      ['/0/decreasingToward/0', 'must be another node than that of its own site'],
      ['/0/increasingToward/1', 'NOWHERE is not known'],
    ]);
    expect((await admin.get('/api/read-points').expect(200)).body.data).toEqual([]);
  });

  test('of a side that is a site: as sent, as it stands already, and of a spot', async () => {
    const site = 'must be empty or left out: this side is a site, not the open line';
    expect(await faultsOf({ ...lead, increasingToward: ['EAST'] })).toEqual([
      ['/increasingToward', site],
    ]);
    await store(lead);
    const { decreasingPlace, increasingPlace, ...rest } = lead;
    const both = { decreasingToward: ['FORK'], increasingToward: ['EAST'] };
    expect(await faultsOf({ ...rest, ...both })).toEqual([['/increasingToward', site]]);
    const ofSpot = 'must be empty or left out: a spot has no lines';
    expect(await faultsOf({ ...spot, ...both })).toEqual([
      ['/decreasingToward', ofSpot],
      ['/increasingToward', ofSpot],
    ]);
    const gone = { ...lead, increasingPlace: { site: 'GONE' }, increasingToward: ['EAST'] };
    expect(await faultsOf(gone)).toEqual([
      ['/increasingPlace/site', 'GONE is not known'],
      ['/increasingToward', site],
    ]);
  });

  test('of somebody who is no administrator', async () => {
    await store(onLine);
    const dispatcher = await signIn(app, await buildPerson(db, { roles: ['dispatcher'] }));
    await dispatcher
      .post('/api/read-points')
      .send({ ...onLine, decreasingToward: ['FORK'] })
      .expect(403);
    expect(await store(onLine)).toEqual({ decreasingToward: [], increasingToward: [] });
  });
});

describe('a node that a read point names', () => {
  test.each(['decreasingToward', 'increasingToward'])('%s stays while it does', async (field) => {
    const nodes = [{ code: 'SPUR', name: 'Spur', latitude: 45, longitude: -93 }];
    await admin.post('/api/routes').send({ nodes }).expect(200);
    await admin.post('/api/sites').send(yard('QUAY')).expect(200);
    // Longer codes with its own in them do not name it.
    const others = [{ ...nodes[0], code: 'SPUR2' }];
    await admin.post('/api/routes').send({ nodes: others }).expect(200);
    await store({ ...onLine, [field]: ['EAST', 'SPUR', 'QUAY'] });
    const refusal = 'It cannot go while these refer to it: lines of read points.';
    for (const path of ['routes/nodes/SPUR', 'sites/QUAY']) {
      const { body } = await admin.delete(`/api/${path}`).expect(409);
      expect(body.detail).toBe(refusal);
    }
    await store({ ...onLine, [field]: ['EAST', 'SPUR2'] });
    await admin.delete('/api/routes/nodes/SPUR').expect(204);
    await admin.delete('/api/sites/QUAY').expect(204);
  });
});

describe('history', () => {
  let line: Site;
  let east: Site;
  const CARS = [1, 2, 3];
  const at = (minute: number) => Date.parse('2026-11-02T10:00:00Z') + minute * 60_000;
  const lines = { decreasingToward: ['FORK'], increasingToward: ['EAST'] };
  const unknown = { direction: 'unknown', directionBasis: null };

  /** One antenna on the line and one on the lead of the east yard: no read tells a direction. */
  beforeEach(async () => {
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
