import request from 'supertest';
import { beforeEach, describe, expect, test } from 'vitest';
import { createApp } from '../../server/app.js';
import { equipmentDetailAnswer } from '../../server/contract/equipment.js';
import { movementsAnswer } from '../../server/contract/movements.js';
import { aarIdentity, isoIdentity } from '../../server/domain/identifiers/identity.js';
import { modelsOf } from '../../server/models/index.js';
import type { Site } from '../../server/models/site.js';
import type { Unit } from '../../server/models/unit.js';
import { buildContext } from '../support/context.js';
import { useTestDatabase } from '../support/database.js';
import {
  buildOrganisation,
  buildPerson,
  buildSite,
  buildUnit,
  PASSWORD,
  signIn,
} from '../support/factories.js';
import { buildLeg, buildStay, hours, placeUnit } from '../support/histories.js';

const db = useTestDatabase();
const NOW = new Date('2026-03-10T12:00:00.000Z');
const ago = (count: number) => new Date(NOW.getTime() - hours(count));
const iso = (count: number) => ago(count).toISOString();

let alder: Site;
let cairn: Site;
let unit: Unit;

beforeEach(async () => {
  alder = await buildSite(db, { code: 'ALDER', name: 'Alder Bend Yard' });
  cairn = await buildSite(db, { code: 'CAIRN', name: 'Cairn Junction' });
  unit = await buildUnit(db, { identity: aarIdentity('QTKX', 40127) });
});

async function openPortal(values: Parameters<typeof buildPerson>[1] = {}) {
  const context = buildContext(db);
  context.clock.set(NOW);
  return signIn(createApp(context), await buildPerson(db, values));
}

/** At Alder from 100 h to 80 h ago, at Cairn from 70 h to 20 h ago, at Alder since 10 h. */
async function buildJourney() {
  const stays = [
    { site: alder, firstSeenAt: ago(100), departedAt: ago(80) },
    { site: cairn, firstSeenAt: ago(70), departedAt: ago(20) },
    { site: alder, firstSeenAt: ago(10) },
  ] as const;
  for (const stay of stays) await buildStay(db, unit, stay);
  const [first, second, third] = stays;
  const there = { departedAt: ago(80), arrivedAt: ago(70), railMetres: 120_000 };
  const back = { departedAt: ago(20), arrivedAt: ago(10), railMetres: 125_000, estimated: true };
  await buildLeg(db, unit, { from: first, to: second, ...there });
  await buildLeg(db, unit, { from: second, to: third, ...back });
  await placeUnit(db, unit, { state: 'onHand', at: ago(10), arrivedAt: ago(10), site: alder });
}

describe('one unit', () => {
  test('tells its register, its tags and all the identities it ever had', async () => {
    const { Identity, Tag } = modelsOf(db.sequelize);
    await Identity.update({ validFrom: ago(1_000) }, { where: { unitId: unit.id } });
    const former = aarIdentity('QBLX', 7);
    await Identity.create({ ...former, unitId: unit.id, validFrom: null, validTo: ago(1_000) });
    await Tag.create({
      unitId: unit.id,
      value: 'QTKX 40127',
      side: 'left',
      validFrom: null,
      validTo: null,
    });
    await placeUnit(db, unit, { at: ago(1), site: alder });
    const agent = await openPortal();
    const { body } = await agent.get('/api/equipment/QTKX40127').expect(200);
    expect(equipmentDetailAnswer.parse(body)).toEqual(body);
    expect(body.data).toMatchObject({
      unitId: 'QTKX40127',
      state: 'enRoute',
      identities: [
        { unitId: 'QTKX40127', current: true, validFrom: iso(1_000), validTo: null },
        { unitId: 'QBLX7', current: false, validFrom: null, validTo: iso(1_000) },
      ],
      tags: [{ value: 'QTKX 40127', side: 'left', validFrom: null, validTo: null }],
      lease: null,
      riding: [],
      carriedBy: null,
      sitesOnly: false,
      asOf: NOW.toISOString(),
    });
    expect(body.can).toEqual({ watch: true });
  });

  test.each([
    ['QTKX 40127', 'QTKX40127'],
    ['qtkx040127', 'QTKX40127'],
    ['ZQXU 305438 1', 'ZQXU3054381'],
    ['zqxu305438', 'ZQXU3054381'],
  ])('%s is shown the way to %s', async (written, compact) => {
    await placeUnit(db, unit);
    await placeUnit(db, await buildUnit(db, { identity: isoIdentity('ZQXU', 305438) }));
    const agent = await openPortal();
    const address = `/api/equipment/${encodeURIComponent(written)}`;
    const answer = await agent.get(address).expect(308);
    expect(answer.headers.location).toBe(`/api/equipment/${compact}`);
    const below = await agent.get(`${address}/movements?from=2026-01-01T00:00:00Z`).expect(308);
    expect(below.headers.location).toBe(
      `/api/equipment/${compact}/movements?from=2026-01-01T00:00:00Z`,
    );
  });

  test('a former identity leads to the present one, unless somebody else holds it now', async () => {
    const { Identity } = modelsOf(db.sequelize);
    const former = { ...aarIdentity('QBLX', 7), unitId: unit.id };
    await Identity.create({ ...former, validFrom: null, validTo: ago(1_000) });
    await placeUnit(db, unit);
    const agent = await openPortal();
    const moved = await agent.get('/api/equipment/QBLX7').expect(308);
    expect(moved.headers.location).toBe('/api/equipment/QTKX40127');
    const other = await buildUnit(db, { identity: aarIdentity('QZKX', 9) });
    await Identity.create({ ...former, unitId: other.id, validFrom: ago(900), validTo: null });
    await Identity.update({ validTo: ago(900) }, { where: { compact: 'QZKX9' } });
    await placeUnit(db, other);
    const { body } = await agent.get('/api/equipment/QBLX7').expect(200);
    expect(body.data.identities).toHaveLength(2);
  });

  test.each(['QTKX1', 'nonsense', '40127', 'ZQXU3054385', '%00', '%F0%9F%9A%82'])(
    '%s is 404',
    async (address) => {
      await placeUnit(db, unit);
      const agent = await openPortal();
      for (const below of ['', '/movements', '/sightings', '/reads']) {
        await agent.get(`/api/equipment/${address}${below}`).expect(404);
      }
    },
  );
});

describe('movements', () => {
  test('are stays and the legs between them, oldest first, with rail metres', async () => {
    await buildJourney();
    const agent = await openPortal();
    const { body } = await agent.get('/api/equipment/QTKX40127/movements').expect(200);
    expect(movementsAnswer.parse(body)).toEqual(body);
    expect(body).toMatchObject({
      data: {
        stays: [
          { site: { code: 'ALDER' }, arrivedAt: iso(100), departedAt: iso(80), dwellMinutes: 1200 },
          { site: { code: 'CAIRN' }, arrivedAt: iso(70), departedAt: iso(20), dwellMinutes: 3000 },
          { site: { code: 'ALDER' }, arrivedAt: iso(10), departedAt: null, dwellMinutes: 600 },
        ],
        railMetres: 245_000,
      },
      next: null,
    });
    const names = { ALDER: 'Alder Bend Yard', CAIRN: 'Cairn Junction' };
    const place = (code: keyof typeof names) => ({ code, name: names[code] });
    expect(body.data.legs).toEqual([
      {
        from: place('ALDER'),
        to: place('CAIRN'),
        departedAt: iso(80),
        arrivedAt: iso(70),
        railMetres: 120_000,
        minutes: 600,
        estimated: false,
      },
      {
        from: place('CAIRN'),
        to: place('ALDER'),
        departedAt: iso(20),
        arrivedAt: iso(10),
        railMetres: 125_000,
        minutes: 600,
        estimated: true,
      },
    ]);
  });

  test('say how an end is known, with bounds only where nobody saw it', async () => {
    await buildStay(db, unit, {
      site: alder,
      firstSeenAt: ago(50),
      arrivedAt: null,
      arrivalLatest: ago(50),
      departedAt: ago(30),
      departureBasis: 'inferred',
      departureEarliest: ago(40),
      departureLatest: ago(20),
    });
    await placeUnit(db, unit, { at: ago(20), site: cairn });
    const agent = await openPortal();
    const { body } = await agent.get('/api/equipment/QTKX40127/movements').expect(200);
    expect(body.data.stays[0]).toMatchObject({
      arrivedAt: null,
      arrivalBasis: 'unknown',
      arrivalBounds: { earliest: null, latest: iso(50) },
      departureBasis: 'inferred',
      departureBounds: { earliest: iso(40), latest: iso(20) },
      dwellMinutes: 1200,
      atLeast: true,
    });
  });

  test('are provisional until the time to come back has passed', async () => {
    await buildStay(db, unit, {
      site: alder,
      firstSeenAt: ago(50),
      departedAt: ago(2),
      departureFinalAt: new Date(NOW.getTime() + hours(10)),
    });
    await placeUnit(db, unit, { at: ago(2), site: alder });
    const context = buildContext(db);
    context.clock.set(NOW);
    const agent = await signIn(createApp(context), await buildPerson(db));
    const provisional = async () => {
      const { body } = await agent.get('/api/equipment/QTKX40127/movements').expect(200);
      const [stay] = body.data.stays;
      return [stay.arrivalProvisional, stay.departureProvisional, stay.provisional];
    };
    expect(await provisional()).toEqual([false, true, true]);
    context.clock.advance(hours(10));
    expect(await provisional()).toEqual([false, false, false]);
  });

  test('of a span are the stays that overlap it and the legs that ended in it', async () => {
    await buildJourney();
    const agent = await openPortal();
    const of = async (from: number, to: number) => {
      const span = { from: iso(from), to: iso(to) };
      const { body } = await agent.get('/api/equipment/QTKX40127/movements').query(span);
      const { stays, legs, railMetres } = body.data;
      const codes = stays.map((stay: { site: { code: string } }) => stay.site.code);
      return { codes, legs: legs.length, railMetres };
    };
    expect(await of(90, 60)).toEqual({ codes: ['ALDER', 'CAIRN'], legs: 1, railMetres: 120_000 });
    expect(await of(60, 30)).toEqual({ codes: ['CAIRN'], legs: 0, railMetres: 0 });
    expect(await of(60, 5)).toEqual({ codes: ['CAIRN', 'ALDER'], legs: 1, railMetres: 125_000 });
    expect(await of(79, 71)).toEqual({ codes: [], legs: 0, railMetres: 0 });
  });

  test('come whole in pages, the rail metres always of the whole span', async () => {
    await buildJourney();
    const agent = await openPortal();
    const sites: string[] = [];
    let [legs, cursor] = [0, ''];
    do {
      const page = cursor ? `&cursor=${cursor}` : '';
      const { body } = await agent.get(`/api/equipment/QTKX40127/movements?limit=1${page}`);
      sites.push(...body.data.stays.map((stay: { site: { code: string } }) => stay.site.code));
      legs += body.data.legs.length;
      expect(body.data.railMetres).toBe(245_000);
      cursor = body.next ?? '';
    } while (cursor);
    expect({ sites, legs }).toEqual({ sites: ['ALDER', 'CAIRN', 'ALDER'], legs: 2 });
  });

  test.each([
    ['limit=501', '?limit'],
    ['from=yesterday', '?from'],
    ['from=2026-03-02T00:00:00Z&to=2026-03-01T00:00:00Z', '?to'],
    ['cursor=x', '?cursor'],
    ['page=2', '?page'],
  ])('%s is 400 with a pointer', async (query, pointer) => {
    await placeUnit(db, unit);
    const agent = await openPortal();
    const { body } = await agent.get(`/api/equipment/QTKX40127/movements?${query}`).expect(400);
    expect(body.errors).toEqual([{ pointer, detail: expect.any(String) }]);
  });

  test('of a car that is not theirs do not exist for an owner, in whatever form it is asked', async () => {
    await buildJourney();
    const organisation = await buildOrganisation(db);
    const agent = await openPortal({ roles: ['owner'], organisation });
    for (const form of ['QTKX40127', 'qtkx 40127']) {
      for (const below of ['', '/movements', '/sightings', '/reads']) {
        await agent.get(`/api/equipment/${encodeURIComponent(form)}${below}`).expect(404);
      }
    }
  });
});

test('a session that ended opens nothing', async () => {
  await placeUnit(db, unit);
  const context = buildContext(db);
  const app = createApp(context);
  const person = await buildPerson(db);
  const answer = await request(app)
    .post('/api/session')
    .send({ email: person.email, password: PASSWORD })
    .expect(200);
  const cookie = String(answer.headers['set-cookie']);
  await request(app).delete('/api/session').set('Cookie', cookie).expect(204);
  await request(app).get('/api/equipment/QTKX40127').set('Cookie', cookie).expect(401);
});
