import { beforeEach, describe, expect, test } from 'vitest';
import { createApp } from '../../server/app.js';
import { encodeAei } from '../../server/domain/identifiers/aei.js';
import { ingestReads } from '../../server/ingest/ingest-reads.js';
import { modelsOf } from '../../server/models/index.js';
import type { Site } from '../../server/models/site.js';
import { createProjector } from '../../server/projections/projector.js';
import { buildContext } from '../support/context.js';
import { useTestDatabase } from '../support/database.js';
import {
  buildAntenna,
  buildOrganisation,
  buildPerson,
  buildReadPoint,
  buildSite,
  signIn,
} from '../support/factories.js';

const db = useTestDatabase();
const models = modelsOf(db.sequelize);
const NOW = new Date('2026-03-10T12:00:00.000Z');
const MARCH_1 = '2026-03-01T00:00:00.000Z';
const MARCH_5 = '2026-03-05T00:00:00.000Z';
const TAG = encodeAei({ groupCode: 19, initial: 'QBLX', number: 5, side: 'left' });
const car = { kind: 'car', owner: 'QTK' };

let admin: Awaited<ReturnType<typeof signIn>>;
let alder: Site;

beforeEach(async () => {
  const context = buildContext(db);
  context.clock.set(NOW);
  admin = await signIn(createApp(context, { clientDirectory: null }), await buildPerson(db));
  await buildOrganisation(db, { code: 'QTK' });
  alder = await buildSite(db, { code: 'ALDER' });
  const lead = await buildReadPoint(db, { site: alder, code: 'N1' });
  await buildAntenna(db, { readPoint: lead, number: 1 });
});

const register = (sent: object) => admin.post('/api/register').send(sent).expect(200);

async function faultsOf(address: string, sent: object) {
  const { body } = await admin.post(address).send(sent).expect(400);
  return body.errors as { pointer: string; detail: string }[];
}

/** Reads of a tag at these instants, by the door and through the projector. */
async function read(tag: string, ...instants: string[]): Promise<void> {
  const reads = instants.map((readAt) => ({ antenna: 1, tag, readAt }));
  const answer = await ingestReads(db, { site: alder, reads, receivedAt: NOW });
  expect(answer).toMatchObject({ accepted: instants.length, held: 0 });
  const context = buildContext(db);
  context.clock.set(NOW);
  const projector = createProjector(context);
  await projector.drain();
  await projector.stop();
}

/** When a car was seen, by what it is called now. */
async function seen(unitId: string): Promise<string[]> {
  const { body } = await admin.get(`/api/equipment/${unitId}/sightings`).expect(200);
  return body.data.map((sighting: { startedAt: string }) => sighting.startedAt).sort();
}

const hourOf = (day: number) => `2026-03-${String(day).padStart(2, '0')}T06:00:00.000Z`;

describe('a tag', () => {
  test('belongs to different cars at different times, and to one at a time', async () => {
    const sent = [
      { ...car, unit: 'QTKX 1', tags: [{ value: TAG, validTo: MARCH_1 }] },
      { ...car, unit: 'QTKX 2', tags: [{ value: TAG, validFrom: MARCH_1, validTo: MARCH_5 }] },
      { ...car, unit: 'QTKX 3', tags: [{ value: TAG, validFrom: MARCH_5 }] },
    ];
    const { body } = await register(sent);
    expect(body.data[1].tags).toEqual([
      { value: TAG, side: null, validFrom: MARCH_1, validTo: MARCH_5 },
    ]);
    await read(TAG, hourOf(4), hourOf(6));
    expect(await seen('QTKX2')).toEqual([hourOf(4)]);
    expect(await seen('QTKX3')).toEqual([hourOf(6)]);
  });

  test('that overlaps another is refused with a pointer at each fault', async () => {
    await register({ ...car, unit: 'QTKX 1', tags: [{ value: TAG, validTo: MARCH_5 }] });
    const other = encodeAei({ groupCode: 19, initial: 'QBLX', number: 6, side: 'left' });
    const faults = await faultsOf('/api/register', [
      { ...car, unit: 'QTKX 2', tags: [{ value: TAG, validFrom: MARCH_1 }, { value: other }] },
      { ...car, unit: 'QTKX 3', tags: [{ value: other, validTo: MARCH_1 }] },
    ]);
    expect(faults).toEqual([
      { pointer: '/0/tags/0/value', detail: 'belongs to another car or box at that time' },
      { pointer: '/1/tags/0/value', detail: 'belongs to another car or box at that time' },
    ]);
    expect(await models.Tag.count()).toBe(1);
  });

  test('moves to another car at an instant: reads before go to the old, after to the new', async () => {
    await register([
      { ...car, unit: 'QTKX 1', tags: [{ value: TAG, side: 'left' }] },
      { ...car, unit: 'QTKX 2' },
    ]);
    const move = { value: TAG.toLowerCase(), side: 'right', validFrom: MARCH_5 };
    expect(await faultsOf('/api/register/QTKX2/tags', move)).toEqual([
      { pointer: '/value', detail: expect.stringContaining('belongs to another car or box') },
    ]);
    const { body } = await admin
      .post('/api/register/QTKX2/tags')
      .send({ ...move, takeFrom: true })
      .expect(200);
    expect(body.data.tags).toEqual([
      { value: TAG, side: 'right', validFrom: MARCH_5, validTo: null },
    ]);
    const old = await admin.get('/api/register/QTKX1').expect(200);
    expect(old.body.data.tags).toEqual([
      { value: TAG, side: 'left', validFrom: null, validTo: MARCH_5 },
    ]);
    await read(TAG, hourOf(4), MARCH_5, hourOf(6));
    expect(await seen('QTKX1')).toEqual([hourOf(4)]);
    expect(await seen('QTKX2')).toEqual([MARCH_5, hourOf(6)]);
  });

  test('is put on a car that nobody takes it from, and refused where it makes no sense', async () => {
    await register([
      { ...car, unit: 'QTKX 1' },
      { ...car, unit: 'QTKX 2', tags: [] },
    ]);
    const put = { value: TAG, validFrom: MARCH_5 };
    await admin.post('/api/register/QTKX1/tags').send(put).expect(200);
    expect(await faultsOf('/api/register/QTKX1/tags', { ...put, validFrom: hourOf(6) })).toEqual([
      { pointer: '/value', detail: 'is worn by this car or box at that time already' },
    ]);
    const earlier = { ...put, validFrom: MARCH_1, takeFrom: true };
    expect(await faultsOf('/api/register/QTKX2/tags', earlier)).toEqual([
      { pointer: '/validFrom', detail: expect.stringContaining('lies before') },
    ]);
    const wrong = { value: 'FFFF', validFrom: '2026-04-01T00:00:00Z' };
    expect((await faultsOf('/api/register/QTKX2/tags', wrong)).map((one) => one.pointer)).toEqual([
      '/value',
      '/validFrom',
    ]);
    expect((await faultsOf('/api/register/QTKX2/tags', {})).map((one) => one.pointer)).toEqual([
      '/value',
      '/validFrom',
    ]);
    await admin.post('/api/register/QTKX9/tags').send(put).expect(404);
  });
});

describe('a mark and number', () => {
  test('changes at an instant; reads of the old one after it are those of a stranger', async () => {
    await register({ ...car, unit: 'QTKX 40127' });
    const { body } = await admin
      .post('/api/register/QTKX40127/renumber')
      .send({ unit: 'qblx 077', from: MARCH_5 })
      .expect(200);
    expect(body.data).toMatchObject({
      unitId: 'QBLX77',
      formerly: [{ unitId: 'QTKX40127', display: 'QTKX 40127', validFrom: null, validTo: MARCH_5 }],
    });
    await read('QTKX 40127', hourOf(4), hourOf(6));
    await read('QBLX 77', hourOf(3), hourOf(7));
    expect(await seen('QBLX77')).toEqual([hourOf(4), hourOf(7)]);
    expect(await seen('QTKX40127')).toEqual([hourOf(6)]);
    const strangers = await models.Unit.findAll({ where: { registered: false }, order: ['id'] });
    expect(strangers.map((unit) => unit.unitKey)).toEqual(['QTKX40127', 'QBLX77']);
  });

  test('is not given to a car while another carries it, nor ahead of its time', async () => {
    await register([
      { ...car, unit: 'QTKX 1' },
      { ...car, unit: 'QTKX 2' },
    ]);
    const renumber = '/api/register/QTKX1/renumber';
    expect(await faultsOf(renumber, { unit: 'QTKX 2', from: MARCH_1 })).toEqual([
      { pointer: '/unit', detail: 'belongs to another car or box at that time' },
    ]);
    expect(await faultsOf(renumber, { unit: 'QTKX 1', from: MARCH_1 })).toEqual([
      { pointer: '/unit', detail: 'is the number it carries already' },
    ]);
    expect(await faultsOf(renumber, { unit: '7', from: '2026-04-01T00:00:00Z' })).toEqual([
      { pointer: '/unit', detail: 'Write the mark before the number.' },
      { pointer: '/from', detail: 'must not lie ahead' },
    ]);
    await admin.post(renumber).send({ unit: 'QTKX 3', from: MARCH_5 }).expect(200);
    expect(
      await faultsOf('/api/register/QTKX3/renumber', { unit: 'QTKX 4', from: MARCH_1 }),
    ).toEqual([{ pointer: '/from', detail: expect.stringContaining('QTKX 3') }]);
  });

  test('that a car gave up is another car from then on, and the two never mix', async () => {
    await register({ ...car, unit: 'QTKX 1', carType: 'tank car' });
    await admin
      .post('/api/register/QTKX1/renumber')
      .send({ unit: 'QTKX 9', from: MARCH_5 })
      .expect(200);
    await read('QTKX 1', hourOf(6));
    const { body } = await register({ ...car, unit: 'QTKX 1', carType: 'boxcar' });
    expect(body.data).toMatchObject({ unitId: 'QTKX1', carType: 'boxcar', formerly: [] });
    await read('QTKX 1', hourOf(4), hourOf(7));
    expect(await seen('QTKX1')).toEqual([hourOf(6), hourOf(7)]);
    expect(await seen('QTKX9')).toEqual([hourOf(4)]);
    const tankCar = await admin.get('/api/register/QTKX9').expect(200);
    expect(tankCar.body.data.carType).toBe('tank car');
    expect(await models.Unit.count()).toBe(2);
  });

  test('comes with former ones, one after the other; the present begins where they end', async () => {
    const formerly = [
      { unit: 'QZZX 5', validTo: MARCH_1 },
      { unit: 'QYYX 6', validTo: MARCH_5 },
    ];
    const { body } = await register({ ...car, unit: 'QTKX 1', formerly });
    expect(body.data.formerly).toMatchObject([
      { unitId: 'QYYX6', validFrom: MARCH_1, validTo: MARCH_5 },
      { unitId: 'QZZX5', validFrom: null, validTo: MARCH_1 },
    ]);
    await read('QYYX 6', hourOf(2), hourOf(6));
    await read('QTKX 1', hourOf(4), hourOf(7));
    expect(await seen('QTKX1')).toEqual([hourOf(2), hourOf(7)]);
    const again = await register({ ...car, unit: 'QTKX 1' });
    expect(again.body.data).toEqual(body.data);
    const none = await register({ ...car, unit: 'QTKX 1', formerly: [] });
    expect(none.body.data.formerly).toEqual([]);
  });

  test('of a former time that another carries, or that are worn at once, are refused', async () => {
    await register({ ...car, unit: 'QTKX 1' });
    const faults = await faultsOf('/api/register', [
      { ...car, unit: 'QTKX 2', formerly: [{ unit: 'QTKX 1', validTo: MARCH_1 }] },
      { ...car, unit: 'QTKX 3', formerly: [{ unit: 'QTKX 4', validTo: MARCH_1 }] },
      { ...car, unit: 'QTKX 5', formerly: [{ unit: 'QTKX 4', validTo: MARCH_1 }] },
    ]);
    expect(faults).toEqual([
      { pointer: '/0/formerly/0/unit', detail: 'belongs to another car or box at that time' },
      { pointer: '/2/formerly/0/unit', detail: 'belongs to another car or box at that time' },
    ]);
    const shape = await faultsOf('/api/register', {
      ...car,
      unit: 'QTKX 6',
      formerly: [
        { unit: '7', validFrom: MARCH_5, validTo: MARCH_1 },
        { unit: 'QTKX 8', validFrom: MARCH_1, validTo: MARCH_5 },
        { unit: 'QTKX 9', validFrom: MARCH_1, validTo: '2026-04-01T00:00:00Z' },
      ],
    });
    expect(shape.map(({ pointer }) => pointer)).toEqual([
      '/formerly/0/validTo',
      '/formerly/0/unit',
      '/formerly/2/validTo',
      '/formerly/2',
    ]);
    const open = await faultsOf('/api/register', {
      ...car,
      unit: 'QTKX 6',
      formerly: [{ unit: 'QTKX 7' }],
    });
    expect(open.map(({ pointer }) => pointer)).toEqual(['/formerly/0/validTo']);
  });

  test('makes a stranger give way for its time, and for no other', async () => {
    await read('QZZX 5', hourOf(2), hourOf(6));
    await register({ ...car, unit: 'QTKX 1', formerly: [{ unit: 'QZZX 5', validTo: MARCH_5 }] });
    await read('QZZX 5', hourOf(3), hourOf(7));
    expect(await seen('QTKX1')).toContain(hourOf(3));
    expect(await seen('QTKX1')).not.toContain(hourOf(7));
    expect(await seen('QZZX5')).toContain(hourOf(7));
    expect(await seen('QZZX5')).not.toContain(hourOf(3));
    const identities = await models.Identity.findAll({ where: { compact: 'QZZX5' } });
    const spans = identities.map(({ validFrom, validTo }) => [validFrom, validTo]);
    expect(spans).toHaveLength(2);
    expect(spans).toEqual(
      expect.arrayContaining([
        [new Date(MARCH_5), null],
        [null, new Date(MARCH_5)],
      ]),
    );
  });

  test('of a car is renumbered by nobody but an administrator', async () => {
    await register({ ...car, unit: 'QTKX 1' });
    const clerk = await buildPerson(db, { roles: ['clerk'], sites: [alder] });
    const agent = await signIn(createApp(buildContext(db), { clientDirectory: null }), clerk);
    const body = { unit: 'QTKX 2', from: MARCH_5 };
    await agent.post('/api/register/QTKX1/renumber').send(body).expect(404);
    const tag = { value: TAG, validFrom: MARCH_5 };
    await agent.post('/api/register/QTKX1/tags').send(tag).expect(404);
  });
});
