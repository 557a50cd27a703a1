import { createHash } from 'node:crypto';
import request from 'supertest';
import { beforeEach, describe, expect, test } from 'vitest';
import { createApp } from '../../server/app.js';
import { modelsOf } from '../../server/models/index.js';
import { buildContext } from '../support/context.js';
import { useTestDatabase } from '../support/database.js';
import {
  buildAntenna,
  buildOrganisation,
  buildPerson,
  buildReadPoint,
  buildSite,
  buildUnit,
  signIn,
} from '../support/factories.js';

const db = useTestDatabase();
const models = modelsOf(db.sequelize);
type Agent = Awaited<ReturnType<typeof signIn>>;
let app: ReturnType<typeof createApp>;
let admin: Agent;

beforeEach(async () => {
  app = createApp(buildContext(db), { clientDirectory: null });
  admin = await signIn(app, await buildPerson(db, { email: 'chief@tests.example' }));
});

const alder = {
  code: 'ALDER',
  name: 'Alder Bend',
  kind: 'yard',
  latitude: 44.9,
  longitude: -93.25,
  timeZone: 'America/Chicago',
};
const north = {
  site: 'ALDER',
  code: 'NORTH',
  name: 'North lead',
  track: '1',
  kind: 'line',
  decreasingPlace: null,
  increasingPlace: { site: 'ALDER', track: null },
};

async function configVersion(): Promise<number> {
  const [row] = await db.pool.query<{ version: number }[]>('SELECT version FROM config_state');
  return row?.version ?? 0;
}

/** Posts and gives back the pointers of the 400 that must come. */
async function faultsOf(path: string, sent: object): Promise<string[]> {
  const { body } = await admin.post(path).send(sent).expect(400);
  return body.errors.map((fault: { pointer: string }) => fault.pointer);
}

describe('a network loaded by script', () => {
  test('stands as it was sent, and the configuration moves on with each part', async () => {
    const before = await configVersion();
    const { body: site } = await admin.post('/api/sites').send(alder).expect(200);
    expect(site).toEqual({
      data: { ...alder, returnHours: 12, dwellLimitHours: 96, leads: [] },
    });
    const cairn = { ...alder, code: 'CAIRN', name: 'Cairn', kind: 'line', returnHours: 6 };
    const { body: sites } = await admin.post('/api/sites').send([alder, cairn]).expect(200);
    expect(sites.data.map((one: { code: string }) => one.code)).toEqual(['ALDER', 'CAIRN']);
    const { body: readPoint } = await admin.post('/api/read-points').send([north]).expect(200);
    expect(readPoint.data).toEqual([
      {
        ...north,
        decreasingToward: [],
        increasingToward: [],
        passGapSeconds: 180,
        visitGapSeconds: 60,
        drillMinutes: 60,
      },
    ]);
    const antenna = { site: 'ALDER', readPoint: 'NORTH', number: 1, offsetM: -4.5, side: 'left' };
    await admin.post('/api/antennas').send(antenna).expect(200, { data: antenna });
    const { body: routes } = await admin
      .post('/api/routes')
      .send({
        nodes: [{ code: 'LARCHJ', name: 'Larch Junction', latitude: 44, longitude: -93 }],
        edges: [
          { from: 'ALDER', to: 'LARCHJ', railMetres: 12_000, kind: 'rail', line: 'Main' },
          { from: 'LARCHJ', to: 'CAIRN', railMetres: 34_000, kind: 'rail', line: 'Main' },
        ],
      })
      .expect(200);
    expect(routes.data.edges).toMatchObject([
      { from: 'ALDER', to: 'LARCHJ' },
      { from: 'LARCHJ', to: 'CAIRN' },
    ]);
    expect(await models.RouteNode.count()).toBe(3);
    expect(await configVersion()).toBe(before + 5);
  });

  test('is the same when it is sent twice', async () => {
    for (let round = 0; round < 2; round += 1) {
      await admin.post('/api/sites').send([alder]).expect(200);
      await admin.post('/api/read-points').send(north).expect(200);
    }
    expect(await models.Site.count()).toBe(1);
    expect(await models.RouteNode.count()).toBe(1);
    expect(await models.ReadPoint.count()).toBe(1);
  });

  test('takes a body of one and of five hundred in the same number of queries', async () => {
    const many = Array.from({ length: 500 }, (_, index) => ({ ...alder, code: `S${index}` }));
    const count = async (sent: object) => {
      let queries = 0;
      db.sequelize.addHook('beforeQuery', 'count', () => void (queries += 1));
      await admin.post('/api/sites').send(sent).expect(200);
      db.sequelize.removeHook('beforeQuery', 'count');
      return queries;
    };
    expect(await count(many)).toBe(await count({ ...alder, code: 'T1' }));
  });
});

describe('a change', () => {
  test('leaves what it does not name', async () => {
    await admin
      .post('/api/sites')
      .send({ ...alder, returnHours: 6, dwellLimitHours: 48 })
      .expect(200);
    const { body } = await admin
      .post('/api/sites')
      .send({ ...alder, name: 'Alder Bend Yard', latitude: 45 })
      .expect(200);
    expect(body.data).toMatchObject({
      name: 'Alder Bend Yard',
      returnHours: 6,
      dwellLimitHours: 48,
    });
    const node = await models.RouteNode.findOne({ where: { code: 'ALDER' } });
    expect({ name: node?.name, latitude: Number(node?.latitude) }).toEqual({
      name: 'Alder Bend Yard',
      latitude: 45,
    });
    await admin.post('/api/read-points').send({ ...north, passGapSeconds: 240 });
    const { name, site, code, kind } = north;
    const later = await admin.post('/api/read-points').send({ name, site, code, kind }).expect(200);
    expect(later.body.data).toMatchObject({ ...north, passGapSeconds: 240 });
  });

  test('of a site keeps its leads unless it lists others, and the map says which are not seen', async () => {
    const leads = [
      { name: 'North lead', equipped: true },
      { name: 'South lead', equipped: false },
    ];
    const { body } = await admin
      .post('/api/sites')
      .send({ ...alder, leads })
      .expect(200);
    expect(body.data.leads).toEqual(leads);
    const kept = await admin.post('/api/sites').send(alder).expect(200);
    expect(kept.body.data.leads).toEqual(leads);
    const map = await admin.get('/api/map').expect(200);
    expect(map.body.features[0].properties.unseenLeads).toEqual(['South lead']);
    const none = await admin
      .post('/api/sites')
      .send({ ...alder, leads: [] })
      .expect(200);
    expect(none.body.data.leads).toEqual([]);
    const faults = await faultsOf('/api/sites', {
      ...alder,
      leads: [{ name: '', equipped: 'yes' }, { name: 'East lead' }],
    });
    expect(faults).toEqual(['/leads/0/name', '/leads/0/equipped', '/leads/1/equipped']);
    expect(await faultsOf('/api/sites', { ...alder, leads: [leads[0], leads[0]] })).toEqual([
      '/leads',
    ]);
  });

  test('of an edge from its other end is a change of the same edge', async () => {
    await buildSite(db);
    await admin.post('/api/sites').send([alder, { ...alder, code: 'CAIRN' }]);
    const edge = { from: 'ALDER', to: 'CAIRN', railMetres: 100, kind: 'rail', line: 'Main' };
    await admin
      .post('/api/routes')
      .send({ edges: [edge] })
      .expect(200);
    const { body } = await admin
      .post('/api/routes')
      .send({ edges: [{ ...edge, from: 'CAIRN', to: 'ALDER', railMetres: 200 }] })
      .expect(200);
    expect(body.data.edges).toMatchObject([{ from: 'ALDER', to: 'CAIRN', railMetres: 200 }]);
    expect(await models.RouteEdge.count()).toBe(1);
  });

  test('keeps names in any script', async () => {
    const name = 'Ærø · Łódź · 鉄道 · 🚃';
    const { body } = await admin
      .post('/api/sites')
      .send({ ...alder, name })
      .expect(200);
    expect(body.data.name).toBe(name);
  });

  test('puts a spot read point into its own site', async () => {
    await admin.post('/api/sites').send(alder);
    const spot = { site: 'ALDER', code: 'DOCK', name: 'Dock 3', track: '3', kind: 'spot' };
    const { body } = await admin.post('/api/read-points').send(spot).expect(200);
    const place = { site: 'ALDER', track: '3' };
    expect(body.data).toMatchObject({ decreasingPlace: place, increasingPlace: place });
  });
});

describe('faults', () => {
  test('are told all at once, with pointers, and nothing is stored', async () => {
    const sent = [
      alder,
      { ...alder, code: 'cairn', name: '', kind: 'depot' },
      { ...alder, code: 'GREBE', latitude: 91, longitude: '5', timeZone: 'Mars/Base' },
      { code: 'X' },
      null,
    ];
    expect((await faultsOf('/api/sites', sent)).sort()).toEqual(
      [
        '/1/code',
        '/1/name',
        '/1/kind',
        '/2/latitude',
        '/2/longitude',
        '/2/timeZone',
        '/3/name',
        '/3/kind',
        '/3/latitude',
        '/3/longitude',
        '/3/timeZone',
        '/4',
      ].sort(),
    );
    expect(await models.Site.count()).toBe(0);
  });

  test('of what is referred to undo the rest of the body', async () => {
    await admin.post('/api/sites').send(alder);
    const before = await configVersion();
    const strange = {
      ...north,
      code: 'SOUTH',
      decreasingPlace: { site: 'NOWHERE' },
      visitGapSeconds: 500,
    };
    const pointers = await faultsOf('/api/read-points', [
      north,
      strange,
      { ...north, site: 'GONE' },
      north,
    ]);
    expect(pointers).toEqual([
      '/3/code',
      '/1/decreasingPlace/site',
      '/1/visitGapSeconds',
      '/2/site',
    ]);
    expect(await models.ReadPoint.count()).toBe(0);
    expect(await configVersion()).toBe(before);
  });

  test.each([
    ['/api/antennas', { site: 'ALDER', readPoint: 'N', number: 0, offsetM: 1e9, side: 'top' }],
    ['/api/antennas', { site: 'ALDER', readPoint: 'N', number: 256, offsetM: null, side: 1 }],
  ])('of an antenna: %s %o', async (path, sent) => {
    expect(await faultsOf(path, sent)).toEqual(['/number', '/offsetM', '/side']);
  });

  test('of an antenna of another site', async () => {
    const readPoint = await buildReadPoint(db);
    const site = await buildSite(db);
    const antenna = { site: site.code, readPoint: readPoint.code, number: 1, offsetM: 0 };
    expect(await faultsOf('/api/antennas', { ...antenna, side: 'left' })).toEqual(['/readPoint']);
  });

  test('of the route graph', async () => {
    await admin.post('/api/sites').send(alder);
    const edge = { from: 'ALDER', to: 'ALDER', railMetres: 5, kind: 'rail', line: 'Main' };
    const sent = {
      nodes: [
        { code: 'OTHER', name: 'Other', latitude: 1, longitude: 1, site: 'ALDER' },
        { code: 'OTHER', name: 'Other', latitude: 1, longitude: 1, site: 'GONE' },
      ],
      edges: [edge, { ...edge, from: 'NOWHERE', line: 'main' }, edge],
    };
    expect(await faultsOf('/api/routes', sent)).toEqual([
      '/nodes/1/code',
      '/edges/2/line',
      '/nodes/0/site',
      '/nodes/1/site',
      '/edges/0/to',
      '/edges/1/from',
      '/edges/2/to',
    ]);
    expect(await models.RouteNode.count()).toBe(1);
  });

  test('of a route graph that comes as a plain list, or as one edge', async () => {
    const node = { code: 'LARCHJ', name: 'Larch', latitude: 44, longitude: -93 };
    const edge = { from: 'LARCHJ', to: 'CAIRNJ', railMetres: 5, kind: 'rail', line: 'Main' };
    const cairn = { ...node, code: 'CAIRNJ' };
    expect(await faultsOf('/api/routes', [edge, node, { ...cairn, latitude: 99 }, null])).toEqual([
      '/2/latitude',
      '/3',
    ]);
    expect(await faultsOf('/api/routes', [node, edge, { ...edge, to: 'X' }])).toEqual([
      '/1/to',
      '/2/to',
    ]);
    expect(await faultsOf('/api/routes', edge)).toEqual(['/from', '/to']);
    expect(await faultsOf('/api/routes', { ...edge, kind: 'air' })).toEqual(['/kind']);
    expect(await faultsOf('/api/routes', {})).toEqual(['']);
    expect(await faultsOf('/api/routes', [])).toEqual(['']);
    const { body } = await admin.post('/api/routes').send([edge, node, cairn]).expect(200);
    expect(body.data).toMatchObject({ nodes: [node, cairn], edges: [edge] });
    await admin.post('/api/routes').send(edge).expect(200);
    expect(await models.RouteEdge.count()).toBe(1);
  });

  test('of people', async () => {
    const sent = [
      { email: 'not an address', name: 'A\u0000', roles: [], password: 'short' },
      { email: 'a@tests.example', name: 'A', roles: ['owner'], timeZone: 'UTC' },
      { email: 'b@tests.example', name: 'B', roles: ['king'], password: 'é'.repeat(37) },
      { email: 'A@tests.example ', name: 'A', roles: ['clerk'], sites: ['GONE'] },
    ];
    expect(await faultsOf('/api/people', sent)).toEqual([
      '/0/email',
      '/0/name',
      '/0/roles',
      '/0/password',
      '/2/roles/0',
      '/2/password',
    ]);
    const fit = sent.filter((_person, index) => index % 2 === 1);
    expect(await faultsOf('/api/people', fit)).toEqual(['/1/email']);
    const apart = [sent[1], { ...sent[3], email: 'c@tests.example' }];
    expect(await faultsOf('/api/people', apart as object)).toEqual([
      '/0/organisation',
      '/1/sites/0',
    ]);
  });

  test.each([
    '/api/organisations',
    '/api/people',
    '/api/sites',
    '/api/read-points',
    '/api/antennas',
  ])('of an empty, huge or foreign body: %s', async (path) => {
    expect(await faultsOf(path, [])).toEqual(['']);
    const { body } = await admin.post(path).expect(400);
    expect(body.errors[0].detail).toBe('is missing');
    await admin
      .post(path)
      .send(Array.from({ length: 5_001 }, () => 1))
      .expect(413);
    await admin.post(path).type('text/plain').send('{}').expect(415);
    await admin.post(path).type('json').send('{"code":').expect(400);
    await admin.post(path).type('json').send('[').expect(400);
    await admin
      .post(path)
      .type('json')
      .send(`${'['.repeat(40)}${']'.repeat(40)}`)
      .expect(400);
    await admin.post(path).type('json; charset=utf-16').send('{}').expect(415);
    await admin
      .post(path)
      .type('json')
      .send(`"${'x'.repeat(5_000_000)}"`)
      .expect(413);
  });
});

describe('lists', () => {
  test('come page by page, without a gap or a repeat', async () => {
    const codes = ['A1', 'B2', 'C3', 'D4', 'E5'];
    await admin.post('/api/sites').send(codes.map((code) => ({ ...alder, code })));
    const seen: string[] = [];
    let next: string | null = null;
    do {
      const query: Record<string, string> = next ? { limit: '2', cursor: next } : { limit: '2' };
      const { body } = await admin.get('/api/sites').query(query).expect(200);
      seen.push(...body.data.map((site: { code: string }) => site.code));
      next = body.next;
    } while (next !== null);
    expect(seen).toEqual(codes);
  });

  test.each([
    ['limit=0', '?limit'],
    ['limit=201', '?limit'],
    ['limit=-1', '?limit'],
    ['limit=1.5', '?limit'],
    ['limit=x', '?limit'],
    ['limit=', '?limit'],
    ['limit=1&limit=2', '?limit'],
    ['cursor=x', '?cursor'],
    ['cursor=bnVsbA', '?cursor'],
    ['cursor=&limit=1', '?cursor'],
    ['colour=red', '?colour'],
    ['__proto__=1', '?__proto__'],
  ])('refuse %s', async (query, pointer) => {
    for (const path of ['sites', 'people', 'organisations', 'antennas', 'register', 'routes']) {
      const { body } = await admin.get(`/api/${path}?${query}`).expect(400);
      expect(body.errors.map((fault: { pointer: string }) => fault.pointer)).toContain(pointer);
    }
  });

  test.each(['sites', 'people', 'organisations', 'read-points', 'antennas', 'register', 'routes'])(
    'of %s cost as many queries for one row as for thirty',
    async (path) => {
      const fill = async (from: number, count: number) => {
        const numbers = Array.from({ length: count }, (_, index) => from + index);
        const sites = numbers.map((number) => ({ ...alder, code: `S${number}` }));
        await admin.post('/api/sites').send(sites).expect(200);
        const points = sites.map(({ code }) => ({ ...north, site: code, increasingPlace: null }));
        await admin.post('/api/read-points').send(points).expect(200);
        const antenna = { readPoint: 'NORTH', number: 1, offsetM: 0, side: 'left' };
        await admin
          .post('/api/antennas')
          .send(sites.map(({ code }) => ({ ...antenna, site: code })));
        for (const { code } of sites) {
          const owner = await buildOrganisation(db, { code: `O${code}` });
          await buildUnit(db, { owner, tags: [{ value: code }] });
          await buildPerson(db, { roles: ['owner'], organisation: owner });
        }
        const edge = { to: sites[0]?.code, railMetres: 1, kind: 'rail', line: 'Main' };
        const edges = sites.slice(1).map(({ code }) => ({ ...edge, from: code }));
        await admin.post('/api/routes').send({ edges }).expect(200);
      };
      const count = async () => {
        let queries = 0;
        db.sequelize.addHook('beforeQuery', 'count', () => void (queries += 1));
        const { body } = await admin.get(`/api/${path}`).query({ limit: 100 }).expect(200);
        db.sequelize.removeHook('beforeQuery', 'count');
        return { rows: body.data.length as number, queries };
      };
      await fill(1, 2);
      const few = await count();
      await fill(10, 28);
      const many = await count();
      expect(few.queries).toBeGreaterThan(1);
      expect(many.rows).toBeGreaterThan(few.rows + 20);
      expect(many.queries).toBe(few.queries);
    },
  );

  test('of read points and antennas go by site', async () => {
    const first = await buildAntenna(db);
    const second = await buildAntenna(db);
    await buildAntenna(db);
    const site = await models.Site.findByPk(second.siteId);
    const code = site?.code ?? '';
    const antennas = await admin.get('/api/antennas').query({ site: code }).expect(200);
    expect(antennas.body.data).toMatchObject([{ site: code, number: second.number }]);
    const points = await admin.get('/api/read-points').query({ site: code }).expect(200);
    expect(points.body.data).toHaveLength(1);
    const page = await admin.get('/api/antennas').query({ limit: 1 }).expect(200);
    expect(page.body.data).toMatchObject([{ number: first.number }]);
    const rest = await admin.get('/api/antennas').query({ cursor: page.body.next }).expect(200);
    expect(rest.body.data).toHaveLength(2);
    const pointsPage = await admin.get('/api/read-points').query({ limit: 2 }).expect(200);
    const last = await admin.get('/api/read-points').query({ cursor: pointsPage.body.next });
    expect(last.body.data).toHaveLength(1);
  });
});

describe('people', () => {
  test('come in with roles, organisation and sites, and sign in with their password', async () => {
    await admin.post('/api/sites').send(alder);
    const organisation = await buildOrganisation(db, { code: 'QTK' });
    const ada = {
      email: 'Ada@Tests.Example',
      name: 'Ada Quill',
      roles: ['dispatcher', 'owner', 'owner'],
      organisation: organisation.code,
      sites: ['ALDER', 'ALDER'],
      timeZone: 'America/Chicago',
      password: 'twelve bytes and more',
    };
    const { body } = await admin.post('/api/people').send(ada).expect(200);
    expect(body.data).toEqual({
      id: expect.any(Number),
      email: 'ada@tests.example',
      name: 'Ada Quill',
      roles: ['owner', 'dispatcher'],
      organisation: 'QTK',
      sites: ['ALDER'],
      timeZone: 'America/Chicago',
      canSignIn: true,
    });
    const shown = await admin.get(`/api/people/${body.data.id}`).expect(200);
    expect(shown.body).toEqual({ data: body.data, can: { update: true, delete: true } });
    expect(JSON.stringify(shown.body)).not.toContain('$2');
    const agent = await signIn(app, { email: 'ada@tests.example' }, ada.password);
    const { email, name, roles } = ada;
    const changed = await admin.post('/api/people').send({ email, name, roles }).expect(200);
    expect(changed.body.data).toEqual(body.data);
    await agent.get('/api/session').expect(200);
    await admin.post('/api/people').send({ email, name, roles, password: 'another password' });
    await agent.get('/api/session').expect(401);
    await signIn(app, { email: 'ada@tests.example' }, 'another password');
  });

  test('always have an administrator among them who can sign in', async () => {
    await buildPerson(db, { password: null });
    const chief = { email: 'chief@tests.example', name: 'Chief', roles: ['clerk'] };
    await admin.post('/api/people').send(chief).expect(409);
    const person = await models.Person.findOne({ where: { email: chief.email } });
    await admin.delete(`/api/people/${person?.id}`).expect(409);
    await admin.get('/api/people').expect(200);
    await buildPerson(db);
    await admin.delete(`/api/people/${person?.id}`).expect(204);
    await admin.get('/api/people').expect(401);
  });
});

describe('a reader token', () => {
  const ping = (token: string) =>
    request(app)
      .post('/api/ingest/reads')
      .set('Authorization', `Bearer ${token}`)
      .send({ site: 'ALDER', reads: [] });

  test('is told once, stored only as its hash, and ended by the next', async () => {
    await admin.post('/api/sites').send(alder);
    const first = await admin.post('/api/sites/ALDER/reader-token').expect(201);
    const { token } = first.body.data;
    expect(token).toMatch(/^[\w-]{43}$/);
    await ping(token).expect(200);
    const [stored] = await db.pool.query<{ token_hash: Buffer }[]>('SELECT * FROM reader_tokens');
    const hash = createHash('sha256').update(token).digest('hex');
    expect(stored?.token_hash.toString('hex')).toBe(hash);
    expect(JSON.stringify(stored)).not.toContain(token);
    const second = await admin.post('/api/sites/ALDER/reader-token').expect(201);
    await ping(token).expect(401);
    await ping(second.body.data.token).expect(200);
  });

  test('is one, however many are made at once', async () => {
    await admin.post('/api/sites').send(alder);
    const made = await Promise.all(
      Array.from({ length: 5 }, () => admin.post('/api/sites/ALDER/reader-token')),
    );
    const statuses = [];
    for (const { body } of made) statuses.push((await ping(body.data.token)).status);
    expect(statuses.filter((status) => status === 200)).toHaveLength(1);
  });

  test('is made by administrators alone, for sites that there are', async () => {
    const site = await buildSite(db);
    const clerk = await signIn(app, await buildPerson(db, { roles: ['clerk'], sites: [site] }));
    await clerk.post(`/api/sites/${site.code}/reader-token`).expect(403);
    await admin.post('/api/sites/GONE/reader-token').expect(404);
    expect(await models.ReaderToken.count()).toBe(0);
  });
});

describe('removing', () => {
  test('takes away what nothing refers to', async () => {
    await admin.post('/api/organisations').send({ code: 'QTK', name: 'Quarry', kind: 'carOwner' });
    await admin.post('/api/sites').send(alder);
    await admin.post('/api/read-points').send(north);
    const antenna = { site: 'ALDER', readPoint: 'NORTH', number: 1, offsetM: 0, side: 'left' };
    await admin.post('/api/antennas').send(antenna);
    const junction = { code: 'LARCHJ', name: 'Larch', latitude: 44, longitude: -93 };
    const edge = { from: 'ALDER', to: 'LARCHJ', railMetres: 5, kind: 'rail', line: 'Main' };
    const routes = await admin.post('/api/routes').send({ nodes: [junction], edges: [edge] });
    const edgeId = routes.body.data.edges[0].id;

    for (const path of ['sites/ALDER', 'read-points/ALDER/NORTH', 'routes/nodes/LARCHJ']) {
      const { body } = await admin.delete(`/api/${path}`).expect(409);
      expect(body.detail).toContain('It cannot go while these refer to it: ');
    }
    for (const path of [
      `routes/edges/${edgeId}`,
      'routes/nodes/LARCHJ',
      'antennas/ALDER/1',
      'read-points/ALDER/NORTH',
      'sites/ALDER',
      'organisations/QTK',
    ]) {
      await admin.get(`/api/${path}`).expect(200);
      await admin.delete(`/api/${path}`).expect(204);
      await admin.delete(`/api/${path}`).expect(404);
    }
    expect(await models.RouteNode.count()).toBe(0);
  });

  test('leaves an organisation with people or cars', async () => {
    const organisation = await buildOrganisation(db, { code: 'QTK' });
    await buildPerson(db, { roles: ['owner'], organisation });
    const { body } = await admin.delete('/api/organisations/QTK').expect(409);
    expect(body.detail).toBe('It cannot go while these refer to it: people.');
  });
});

describe('who is no administrator', () => {
  const closed = ['organisations', 'people', 'antennas', 'routes', 'routes/nodes', 'register'];

  test('sees the names of sites, and more of those they work at', async () => {
    const own = await buildSite(db, { code: 'ALDER' });
    const other = await buildSite(db, { code: 'CAIRN' });
    const owner = await signIn(app, await buildPerson(db, { roles: ['owner'], sites: [own] }));
    const names = [own, other].map(({ code, name }) => ({ code, name }));
    expect((await owner.get('/api/sites').expect(200)).body.data).toEqual(names);
    expect((await owner.get('/api/sites/ALDER').expect(200)).body).toEqual({
      data: names[0],
      can: { update: false, delete: false },
    });
    const clerk = await signIn(app, await buildPerson(db, { roles: ['clerk'], sites: [own] }));
    const { body } = await clerk.get('/api/sites').expect(200);
    expect(body.data).toEqual([expect.objectContaining({ kind: 'yard' }), names[1]]);
  });

  test('sees the read points of their own sites, and no others', async () => {
    const mine = await buildReadPoint(db, { site: await buildSite(db, { code: 'ALDER' }) });
    const other = await buildReadPoint(db, { site: await buildSite(db, { code: 'CAIRN' }) });
    const site = await models.Site.findOne({ where: { code: 'ALDER' } });
    if (!site) throw new Error('The site is not there.');
    const person = await buildPerson(db, { roles: ['dispatcher'], sites: [site] });
    const dispatcher = await signIn(app, person);
    const { body } = await dispatcher.get('/api/read-points').expect(200);
    expect(body.data).toMatchObject([{ site: 'ALDER', code: mine.code }]);
    await dispatcher.get(`/api/read-points/ALDER/${mine.code}`).expect(200);
    await dispatcher.get(`/api/read-points/CAIRN/${other.code}`).expect(404);
    await dispatcher.delete(`/api/read-points/ALDER/${mine.code}`).expect(403);
    await dispatcher.delete(`/api/read-points/CAIRN/${other.code}`).expect(404);
    const owner = await signIn(app, await buildPerson(db, { roles: ['owner'], sites: [site] }));
    expect((await owner.get('/api/read-points').expect(200)).body.data).toEqual([]);
    await owner.get(`/api/read-points/ALDER/${mine.code}`).expect(404);
  });

  test.each(['owner', 'clerk', 'dispatcher'] as const)('changes nothing: %s', async (role) => {
    const antenna = await buildAntenna(db);
    const site = await models.Site.findByPk(antenna.siteId);
    const person = await buildPerson(db, { roles: [role], sites: site ? [site] : [] });
    const agent = await signIn(app, person);
    for (const path of closed) await agent.get(`/api/${path}`).expect(403);
    for (const path of ['organisations', 'people', 'sites', 'read-points', 'antennas']) {
      await agent.post(`/api/${path}`).send({}).expect(403);
    }
    await agent.post('/api/routes').send({}).expect(403);
    await agent.post('/api/register').send([]).expect(403);
    await agent.get(`/api/people/${person.id}`).expect(404);
    await agent.delete(`/api/people/${person.id}`).expect(404);
    await agent.get(`/api/antennas/${site?.code}/${antenna.number}`).expect(404);
    await agent.delete(`/api/sites/${site?.code}`).expect(403);
    await agent.delete('/api/sites/GONE').expect(404);
  });
});

test('an address that can name nothing is not there', async () => {
  for (const path of [
    'sites/lower',
    'sites/%00',
    "sites/' OR 1=1",
    'people/0',
    'people/x',
    'people/99999999999',
    'antennas/ALDER/0',
    'routes/edges/-1',
    'register/%E0%A4%A',
    'nothing',
  ]) {
    const { status, type } = await admin.get(`/api/${path}`);
    expect([path, status < 500 && status >= 400, type]).toEqual([
      path,
      true,
      'application/problem+json',
    ]);
  }
});
