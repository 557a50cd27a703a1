import { beforeEach, describe, expect, test } from 'vitest';
import { createApp } from '../../server/app.js';
import { modelsOf } from '../../server/models/index.js';
import { buildContext } from '../support/context.js';
import { useTestDatabase } from '../support/database.js';
import { buildPerson, buildReadPoint, signIn } from '../support/factories.js';
import { enterLine, lead, onLine, storePoint, yard } from '../support/line-between-yards.js';

const db = useTestDatabase();
const app = createApp(buildContext(db), { clientDirectory: null });
type Agent = Awaited<ReturnType<typeof signIn>>;
let admin: Agent;

const spot = { site: 'LINE', code: 'DOCK', name: 'Dock', kind: 'spot' };

beforeEach(async () => {
  admin = await signIn(app, await buildPerson(db));
  await enterLine(admin);
});

const store = (point: object) => storePoint(admin, point);

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
