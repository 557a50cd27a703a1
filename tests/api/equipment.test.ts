import request from 'supertest';
import { describe, expect, test } from 'vitest';
import { createApp } from '../../server/app.js';
import { equipmentListAnswer } from '../../server/contract/equipment.js';
import { aarIdentity, isoIdentity, uicIdentity } from '../../server/domain/identifiers/identity.js';
import { FAR } from '../../server/lib/sentinels.js';
import { buildContext } from '../support/context.js';
import { useTestDatabase } from '../support/database.js';
import {
  buildOrganisation,
  buildPerson,
  buildReadPoint,
  buildSite,
  buildUnit,
  signIn,
} from '../support/factories.js';
import { hours, placeUnit } from '../support/histories.js';

const db = useTestDatabase();
const NOW = new Date('2026-03-10T12:00:00.000Z');
const ago = (count: number) => new Date(NOW.getTime() - hours(count));

async function openPortal(values: Parameters<typeof buildPerson>[1] = {}) {
  const context = buildContext(db);
  context.clock.set(NOW);
  const person = await buildPerson(db, values);
  return { context, person, agent: await signIn(createApp(context), person) };
}

const identitiesIn = (body: { data: { unitId: string }[] }) => body.data.map((row) => row.unitId);

describe('a row of the list of equipment', () => {
  test('tells all of a car on hand, with its stay against the limit of the site', async () => {
    const owner = await buildOrganisation(db, { code: 'QTL', name: 'Quarrel Tank Leasing' });
    const site = await buildSite(db, {
      code: 'ALDER',
      name: 'Alder Bend Yard',
      latitude: 44.25,
      longitude: -93.5,
      dwellLimitHours: 48,
    });
    const readPoint = await buildReadPoint(db, { site, code: 'N1', name: 'North lead' });
    const unit = await buildUnit(db, {
      identity: aarIdentity('QTKX', 40127),
      owner,
      carType: 'tank car',
    });
    await placeUnit(db, unit, {
      state: 'onHand',
      at: ago(50),
      arrivedAt: ago(50.25),
      passStartedAt: ago(51),
      direction: 'increasing',
      track: '7',
      site,
      readPoint,
    });
    const { agent } = await openPortal();
    const { body } = await agent.get('/api/equipment').expect(200);
    expect(equipmentListAnswer.parse(body)).toEqual(body);
    expect(body).toEqual({
      data: [
        {
          unitId: 'QTKX40127',
          display: 'QTKX 40127',
          scheme: 'aar',
          kind: 'car',
          carType: 'tank car',
          registered: true,
          owner: { id: owner.id, code: 'QTL', name: 'Quarrel Tank Leasing' },
          state: 'onHand',
          quiet: false,
          quietAt: null,
          pastLimit: true,
          lastSeen: {
            site: { code: 'ALDER', name: 'Alder Bend Yard', latitude: 44.25, longitude: -93.5 },
            track: '7',
            readPoint: { code: 'N1', name: 'North lead' },
            at: ago(50).toISOString(),
            direction: 'increasing',
            basis: 'read',
            passId: `ALDER-N1-${ago(51).getTime().toString(36)}`,
          },
          between: null,
          stay: {
            arrivedAt: ago(50.25).toISOString(),
            firstSeenAt: ago(50).toISOString(),
            dwellMinutes: 50.25 * 60,
            atLeast: false,
            limitHours: 48,
            limitAt: ago(2.25).toISOString(),
          },
        },
      ],
      next: null,
    });
  });

  test('of a car whose arrival nobody saw counts dwell from the first sighting, as at least', async () => {
    const site = await buildSite(db);
    await placeUnit(db, await buildUnit(db), {
      state: 'onHand',
      at: ago(1),
      stayFirstSeenAt: ago(30),
      site,
    });
    const { agent } = await openPortal();
    const { body } = await agent.get('/api/equipment').expect(200);
    expect(body.data[0].stay).toMatchObject({
      arrivedAt: null,
      firstSeenAt: ago(30).toISOString(),
      dwellMinutes: 1800,
      atLeast: true,
    });
  });

  test('of a car under way names the site it left; of one never read nothing at all', async () => {
    const site = await buildSite(db, { code: 'WICK', name: 'Wickett Line' });
    await placeUnit(db, await buildUnit(db), { state: 'enRoute', at: ago(5), site });
    await placeUnit(db, await buildUnit(db));
    const { agent } = await openPortal();
    const { body } = await agent.get('/api/equipment').expect(200);
    const [moving, unseen] = body.data;
    expect(moving).toMatchObject({
      state: 'enRoute',
      between: { from: { code: 'WICK', name: 'Wickett Line' } },
      stay: null,
      quiet: false,
      quietAt: new Date(ago(5).getTime() + hours(72)).toISOString(),
    });
    expect(unseen).toMatchObject({ state: 'unseen', lastSeen: null, between: null, stay: null });
  });

  test('never calls a stranger quiet', async () => {
    const site = await buildSite(db);
    const stranger = await buildUnit(db, { registered: false });
    await placeUnit(db, stranger, { at: ago(100), site });
    const own = await buildUnit(db);
    await placeUnit(db, own, { at: ago(100), site });
    const { agent } = await openPortal();
    const { body } = await agent.get('/api/equipment?sort=-lastSeen').expect(200);
    const quietOf = (registered: boolean) =>
      body.data.find((row: { registered: boolean }) => row.registered === registered).quiet;
    expect([quietOf(true), quietOf(false)]).toEqual([true, false]);
    const quiet = await agent.get('/api/equipment?quiet=true').expect(200);
    expect(identitiesIn(quiet.body)).toEqual([own.unitKey]);
  });
});

describe('filters of the list', () => {
  async function buildFleet() {
    const [alder, cairn] = [
      await buildSite(db, { code: 'ALDER', dwellLimitHours: 24 }),
      await buildSite(db, { code: 'CAIRN' }),
    ];
    const owner = await buildOrganisation(db, { code: 'QTL' });
    const add = async (number: number, values: Parameters<typeof placeUnit>[2], kind = 'car') => {
      const identity = aarIdentity('QTKX', number);
      await placeUnit(db, await buildUnit(db, { identity, owner, kind }), values);
    };
    await add(1, { state: 'onHand', at: ago(2), site: alder });
    await add(2, { state: 'onHand', at: ago(30), site: alder });
    await add(3, { state: 'onHand', at: ago(30), site: cairn });
    await add(4, { state: 'enRoute', at: ago(4), site: cairn }, 'locomotive');
    await add(5, { state: 'enRoute', at: ago(90), site: alder });
    await add(6, {});
    return { owner };
  }

  test.each([
    ['state=onHand', ['1', '2', '3']],
    ['state=unseen', ['6']],
    ['quiet=true', ['5']],
    ['quiet=false', ['1', '2', '3', '4', '6']],
    ['pastLimit=true', ['2']],
    ['site=ALDER', ['1', '2', '5']],
    ['site=ALDER&state=onHand&pastLimit=false', ['1']],
    ['kind=locomotive', ['4']],
    ['owner=QTL&kind=locomotive', ['4']],
  ])('%s', async (query, numbers) => {
    await buildFleet();
    const { agent } = await openPortal();
    for (const sort of ['unit', 'attention', 'lastSeen', '-lastSeen', 'dwell']) {
      const { body } = await agent.get(`/api/equipment?${query}&sort=${sort}`).expect(200);
      const found = identitiesIn(body).map((unitId) => unitId.slice(4));
      expect(sort === 'unit' ? found : found.sort()).toEqual(numbers);
    }
  });

  test('an owner is named by id as well as by code', async () => {
    const { owner } = await buildFleet();
    await placeUnit(db, await buildUnit(db));
    const { agent } = await openPortal();
    const { body } = await agent.get(`/api/equipment?owner=${owner.id}`).expect(200);
    expect(body.data).toHaveLength(6);
  });

  test('each order is the one it says', async () => {
    await buildFleet();
    const { agent } = await openPortal();
    const orderOf = async (sort: string) => {
      const { body } = await agent.get(`/api/equipment?sort=${sort}`).expect(200);
      return identitiesIn(body)
        .map((unitId) => unitId.slice(4))
        .join('');
    };
    expect(await orderOf('attention')).toBe('521346');
    expect(await orderOf('-lastSeen')).toMatch(/^14(23|32)56$/);
    expect(await orderOf('lastSeen')).toMatch(/^65(23|32)41$/);
    expect(await orderOf('dwell')).toMatch(/^(23|32)1/);
    expect(await orderOf('unit')).toBe('123456');
  });

  test('a locomotive, which no limit applies to, leads by dwell only when asked for', async () => {
    await buildFleet();
    const site = await buildSite(db);
    const stands = { state: 'onHand', at: ago(500), site, limitAt: FAR } as const;
    const engine = { identity: aarIdentity('QTKX', 7), kind: 'locomotive' };
    await placeUnit(db, await buildUnit(db, engine), stands);
    const { agent } = await openPortal();
    const firstBy = async (query: string) => {
      const { body } = await agent.get(`/api/equipment?sort=dwell${query}`).expect(200);
      return identitiesIn(body)[0];
    };
    expect(await firstBy('')).toMatch(/^QTKX[23]$/);
    expect(await firstBy('&kind=locomotive')).toBe('QTKX7');
  });

  test('the order by unit takes numbers as numbers', async () => {
    for (const number of [100, 20, 3]) {
      await placeUnit(db, await buildUnit(db, { identity: aarIdentity('QBLX', number) }));
    }
    const { agent } = await openPortal();
    const { body } = await agent.get('/api/equipment?sort=unit').expect(200);
    expect(identitiesIn(body)).toEqual(['QBLX3', 'QBLX20', 'QBLX100']);
  });
});

describe('search', () => {
  async function buildNumbers() {
    const identities = [
      aarIdentity('QTKX', 40127),
      aarIdentity('QTKX', 401270),
      aarIdentity('QBLX', 40127),
      aarIdentity('QBLX', 927),
      isoIdentity('ZQXU', 305438),
      uicIdentity('218124712173'),
    ];
    for (const identity of identities) await placeUnit(db, await buildUnit(db, { identity }));
  }

  test.each([
    ['40127', ['QBLX40127', 'QTKX40127', 'QTKX401270']],
    ['040127', ['QBLX40127', 'QTKX40127', 'QTKX401270']],
    ['qtkx 040127', ['QTKX40127', 'QTKX401270']],
    ['QTKX401', ['QTKX40127', 'QTKX401270']],
    ['qblx', ['QBLX927', 'QBLX40127']],
    ['QT', ['QTKX40127', 'QTKX401270']],
    ['zqxu 305438-1', ['ZQXU3054381']],
    ['ZQXU 305', ['ZQXU3054381']],
    ['3054381', ['ZQXU3054381']],
    ['305438', ['ZQXU3054381']],
    ['21 81 2471 217-3', ['218124712173']],
    ['5438', ['ZQXU3054381']],
    ['ZQXU 305438 5', []],
    ['%', []],
    ['QTKX_0127', []],
    ['Alder Bend', []],
  ])('%s', async (text, expected) => {
    await buildNumbers();
    const { agent } = await openPortal();
    const { body } = await agent.get('/api/equipment').query({ search: text, sort: 'unit' });
    expect(identitiesIn(body)).toEqual(expected);
  });

  test('looks for a part inside numbers only when nothing begins with it, on every page', async () => {
    for (const number of [91234, 81234, 71234]) {
      await placeUnit(db, await buildUnit(db, { identity: aarIdentity('QTKX', number) }));
    }
    const { agent } = await openPortal();
    const query = { search: '1234', sort: 'unit', limit: 2 };
    const first = await agent.get('/api/equipment').query(query).expect(200);
    const cursor: string = first.body.next;
    const second = await agent
      .get('/api/equipment')
      .query({ ...query, cursor })
      .expect(200);
    expect([...identitiesIn(first.body), ...identitiesIn(second.body)]).toEqual([
      'QTKX71234',
      'QTKX81234',
      'QTKX91234',
    ]);
  });
});

describe('refusals', () => {
  test('without a sign-in', async () => {
    const app = createApp(buildContext(db));
    for (const path of ['', '/QTKX1', '/QTKX1/movements', '/QTKX1/sightings', '/QTKX1/reads']) {
      await request(app).get(`/api/equipment${path}`).expect(401);
    }
  });

  test.each([
    ['limit=201', '?limit'],
    ['limit=0', '?limit'],
    ['sort=age', '?sort'],
    ['state=lost', '?state'],
    ['quiet=maybe', '?quiet'],
    ['kind=ship', '?kind'],
    ['site=NOWHERE', '?site'],
    ['site=alder', '?site'],
    ['owner=NOBODY', '?owner'],
    ['colour=red', '?colour'],
    ['cursor=AAAA', '?cursor'],
    ['search=', '?search'],
  ])('%s is 400 with a pointer', async (query, pointer) => {
    const { agent } = await openPortal();
    const { body } = await agent.get(`/api/equipment?${query}`).expect(400);
    expect(body.errors).toEqual([{ pointer, detail: expect.any(String) }]);
  });

  test('several faults are named at once', async () => {
    const { agent } = await openPortal();
    const { body } = await agent.get('/api/equipment?limit=999&sort=age&x=1').expect(400);
    expect(body.errors.map((fault: { pointer: string }) => fault.pointer).sort()).toEqual([
      '?limit',
      '?sort',
      '?x',
    ]);
  });

  test('a cursor of another order is refused', async () => {
    for (let count = 0; count < 3; count += 1) await placeUnit(db, await buildUnit(db));
    const { agent } = await openPortal();
    const { body } = await agent.get('/api/equipment?sort=unit&limit=1').expect(200);
    const next: string = body.next;
    await agent.get(`/api/equipment?sort=dwell&cursor=${next}`).expect(400);
  });
});
