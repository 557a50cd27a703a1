import { beforeEach, describe, expect, test } from 'vitest';
import { createApp } from '../../server/app.js';
import { encodeAei } from '../../server/domain/identifiers/aei.js';
import { aarIdentity } from '../../server/domain/identifiers/identity.js';
import { modelsOf } from '../../server/models/index.js';
import type { Organisation } from '../../server/models/organisation.js';
import { buildContext } from '../support/context.js';
import { useTestDatabase } from '../support/database.js';
import { buildOrganisation, buildPerson, buildUnit, signIn } from '../support/factories.js';

const db = useTestDatabase();
const models = modelsOf(db.sequelize);
let admin: Awaited<ReturnType<typeof signIn>>;
let owner: Organisation;
let told: number[][];

beforeEach(async () => {
  const context = buildContext(db);
  told = [];
  context.liveEvents.subscribe(({ unitIds }) => told.push(unitIds));
  const app = createApp(context, { clientDirectory: null });
  admin = await signIn(app, await buildPerson(db));
  owner = await buildOrganisation(db, { code: 'QTK' });
});

const aei = (number: number, side: 'left' | 'right') =>
  encodeAei({ groupCode: 19, initial: 'QTKX', number, side, lengthDm: 180, axles: 4 });
const car = { unit: 'qtkx 040127', kind: 'car', carType: 'tank car', owner: 'QTK' };

async function faultsOf(sent: object): Promise<{ pointer: string; detail: string }[]> {
  const { body } = await admin.post('/api/register').send(sent).expect(400);
  return body.errors;
}

/** Owners (by id) who see each unit now. */
async function visibleTo(): Promise<{ org_id: number; unit_id: number }[]> {
  return db.pool.query('SELECT org_id, unit_id FROM visible_units ORDER BY unit_id, org_id');
}

describe('putting on the register', () => {
  test('answers what stands there, whatever way it was written', async () => {
    const tags = [
      { value: ` ${aei(40127, 'left').toLowerCase()} `, side: 'left' },
      { value: aei(40127, 'right'), side: 'right', validFrom: '2026-01-02T03:04:05.678+01:00' },
    ];
    const sent = { ...car, lengthDm: 180, axles: 4, tags };
    const { body } = await admin.post('/api/register').send(sent).expect(200);
    expect(body.data).toEqual({
      unitId: 'QTKX40127',
      display: 'QTKX 40127',
      scheme: 'aar',
      kind: 'car',
      carType: 'tank car',
      owner: 'QTK',
      lengthDm: 180,
      axles: 4,
      tags: [
        { value: aei(40127, 'left'), side: 'left', validFrom: null, validTo: null },
        {
          value: aei(40127, 'right'),
          side: 'right',
          validFrom: '2026-01-02T02:04:05.678Z',
          validTo: null,
        },
      ],
      formerly: [],
    });
    const shown = await admin.get('/api/register/QTKX40127').expect(200);
    expect(shown.body).toEqual({ data: body.data, can: { update: true, delete: true } });
    const unit = await models.Unit.findOne();
    expect(unit).toMatchObject({ unitKey: 'QTKX40127', registered: true, groupCode: 19 });
    expect(await visibleTo()).toEqual([{ org_id: owner.id, unit_id: unit?.id }]);
    expect(told).toEqual([[unit?.id]]);
  });

  test('knows boxes and wagons', async () => {
    const sent = [
      { unit: 'zqxu 305438', kind: 'container', owner: 'QTK' },
      { unit: '21 81 2471 217-3', kind: 'car', owner: 'QTK' },
    ];
    const { body } = await admin.post('/api/register').send(sent).expect(200);
    expect(body.data).toMatchObject([
      { unitId: 'ZQXU3054381', scheme: 'iso6346', carType: null },
      { unitId: '218124712173', scheme: 'uic' },
    ]);
  });

  test('takes five thousand in one request, in as many statements as ten', async () => {
    const count = async (from: number, length: number) => {
      const sent = Array.from({ length }, (_, index) => ({
        ...car,
        unit: `QTKX ${from + index}`,
        tags: [{ value: aei(from + index, 'left'), side: 'left' }],
      }));
      let statements = 0;
      db.sequelize.addHook('beforeQuery', 'count', () => void (statements += 1));
      const { body } = await admin.post('/api/register').send(sent).expect(200);
      db.sequelize.removeHook('beforeQuery', 'count');
      expect(body.data).toHaveLength(length);
      return statements;
    };
    const few = await count(1, 10);
    expect(few).toBeGreaterThan(5);
    expect(await count(1_000, 5_000)).toBe(few);
    expect(await models.Unit.count()).toBe(5_010);
    expect(await models.Tag.count()).toBe(5_010);
    expect(await visibleTo()).toHaveLength(5_010);
    await admin
      .post('/api/register')
      .send(Array.from({ length: 5_001 }, () => car))
      .expect(413);
  });

  test('registers the very unit that reads have named before', async () => {
    const stranger = await buildUnit(db, {
      identity: aarIdentity('QTKX', 40127),
      registered: false,
    });
    await admin.post('/api/register').send(car).expect(200);
    expect(await models.Unit.count()).toBe(1);
    expect(await models.Identity.count()).toBe(1);
    await stranger.reload();
    expect(stranger).toMatchObject({ registered: true, ownerId: owner.id, carType: 'tank car' });
  });

  test('makes one unit of the same number sent many times at once', async () => {
    const sent = Array.from({ length: 6 }, () => admin.post('/api/register').send([car]));
    for (const { status } of await Promise.all(sent)) expect(status).toBe(200);
    expect(await models.Unit.count()).toBe(1);
    expect(await models.Identity.count()).toBe(1);
  });

  test('keeps what a later body leaves out, and forgets what it says is none', async () => {
    const full = { ...car, lengthDm: 180, axles: 4, tags: [{ value: aei(40127, 'left') }] };
    const { body } = await admin.post('/api/register').send(full).expect(200);
    const { unit, kind } = car;
    const again = await admin.post('/api/register').send({ unit, kind }).expect(200);
    expect(again.body).toEqual(body);
    const none = { unit, kind, owner: null, carType: null, lengthDm: null, axles: null, tags: [] };
    const bare = await admin.post('/api/register').send(none).expect(200);
    expect(bare.body.data).toMatchObject({
      owner: null,
      carType: null,
      lengthDm: null,
      axles: null,
      tags: [],
    });
    expect(await visibleTo()).toEqual([]);
  });

  test('shows a car to its new owner and no longer to the old', async () => {
    const buyer = await buildOrganisation(db, { code: 'BUYER' });
    await admin.post('/api/register').send(car).expect(200);
    await admin
      .post('/api/register')
      .send({ ...car, owner: 'BUYER' })
      .expect(200);
    expect((await visibleTo()).map((row) => row.org_id)).toEqual([buyer.id]);
  });
});

describe('faults of the register', () => {
  test('are told with pointers, all at once, and nothing is stored', async () => {
    const version = () => db.pool.query<object[]>('SELECT version FROM config_state');
    const before = await version();
    const faults = await faultsOf([
      { ...car, unit: 'ZQXU 305438 5', kind: 'container' },
      { ...car, unit: '21 81 2471 217-4' },
      { ...car, unit: '40127' },
      { ...car, unit: '' },
      { ...car, unit: 'QTKX 1', owner: 'GONE' },
      { ...car, unit: 'QTKX 2', tags: [{ value: '' }, { value: 'FFFF' }] },
      car,
      { ...car, unit: 'QTKX40127' },
    ]);
    expect(faults).toEqual([
      { pointer: '/0/unit', detail: 'ZQXU 305438 ends in 1, not 5.' },
      { pointer: '/1/unit', detail: '21 81 2471 217 ends in 3, not 4.' },
      { pointer: '/2/unit', detail: 'Write the mark before the number.' },
      { pointer: '/3/unit', detail: expect.stringContaining('Write a mark and number') },
      { pointer: '/5/tags/0/value', detail: expect.any(String) },
      { pointer: '/5/tags/1/value', detail: expect.any(String) },
      { pointer: '/7/unit', detail: 'is given twice: first at /6' },
      { pointer: '/4/owner', detail: 'GONE is not known' },
    ]);
    expect(await models.Unit.count()).toBe(0);
    expect(await version()).toEqual(before);
    expect(told).toEqual([]);
  });

  test('of shape come before all else', async () => {
    const faults = await faultsOf({
      unit: 7,
      kind: 'wagon',
      owner: 'lower',
      lengthDm: -1,
      axles: 1.5,
      tags: [{ side: 'top', validFrom: 'yesterday', validTo: '2026-01-01' }],
    });
    expect(faults.map(({ pointer }) => pointer)).toEqual([
      '/unit',
      '/kind',
      '/owner',
      '/lengthDm',
      '/axles',
      '/tags/0/value',
      '/tags/0/side',
      '/tags/0/validFrom',
      '/tags/0/validTo',
    ]);
  });

  test('name a tag that fails its check, and one that names no equipment', async () => {
    const marker = encodeAei({ groupCode: 12, initial: 'QTKX', number: 1, side: 'left' });
    const good = aei(40127, 'left');
    const bad = `${good[0] === '9' ? '1' : '9'}${good.slice(1)}`;
    const details = await faultsOf({
      ...car,
      tags: [{ value: bad }, { value: marker }, { value: 'ZQXU 305438 5' }],
    });
    expect(details).toEqual([
      { pointer: '/tags/0/value', detail: 'fails its check' },
      { pointer: '/tags/1/value', detail: expect.stringContaining('names no car') },
      { pointer: '/tags/2/value', detail: 'fails its check' },
    ]);
  });
});

describe('a tag', () => {
  const tag = { value: aei(40127, 'left'), side: 'left' };

  test('names one car at a time', async () => {
    await admin
      .post('/api/register')
      .send({ ...car, tags: [tag] })
      .expect(200);
    const taken = await faultsOf([{ ...car, unit: 'QTKX 2', tags: [tag, tag] }]);
    expect(taken).toEqual([
      { pointer: '/0/tags/0/value', detail: 'belongs to another car or box at that time' },
      { pointer: '/0/tags/1/value', detail: 'belongs to another car or box at that time' },
    ]);
    const both = [2, 3].map((number) => ({
      ...car,
      unit: `QTKX ${number}`,
      tags: [{ value: aei(9, 'left') }],
    }));
    expect((await faultsOf(both)).map(({ pointer }) => pointer)).toEqual(['/1/tags/0/value']);
    const backwards = {
      ...tag,
      validFrom: '2026-02-01T00:00:00Z',
      validTo: '2026-01-01T00:00:00Z',
    };
    expect(await faultsOf({ ...car, tags: [backwards] })).toEqual([
      { pointer: '/tags/0/validTo', detail: 'must be later than validFrom' },
    ]);
  });

  test('moves from one car to another, in one body or at an instant', async () => {
    await admin
      .post('/api/register')
      .send({ ...car, tags: [tag] })
      .expect(200);
    const moved = [
      { ...car, tags: [] },
      { ...car, unit: 'QTKX 2', tags: [tag] },
    ];
    const { body } = await admin.post('/api/register').send(moved).expect(200);
    expect(body.data.map((one: { tags: object[] }) => one.tags.length)).toEqual([0, 1]);
    const instant = '2026-03-01T00:00:00.000Z';
    const shared = [
      { ...car, tags: [{ ...tag, validFrom: instant }] },
      { ...car, unit: 'QTKX 2', tags: [{ ...tag, validTo: instant }] },
    ];
    await admin.post('/api/register').send(shared).expect(200);
    expect(await models.Tag.count()).toBe(2);
  });

  test('that stays keeps its row', async () => {
    await admin
      .post('/api/register')
      .send({ ...car, tags: [tag] })
      .expect(200);
    const before = await models.Tag.findOne();
    const other = { value: aei(40127, 'right'), side: 'right' };
    await admin
      .post('/api/register')
      .send({ ...car, tags: [other, tag] })
      .expect(200);
    const after = await models.Tag.findAll({ order: ['id'] });
    expect(after.map(({ side }) => side)).toEqual(['left', 'right']);
    expect(after[0]?.id).toBe(before?.id);
  });
});

describe('the list of the register', () => {
  test('goes by owner and comes page by page', async () => {
    await buildOrganisation(db, { code: 'OTHER' });
    const sent = [1, 2, 3, 4].map((number) => ({
      ...car,
      unit: `QTKX ${number}`,
      owner: number === 4 ? 'OTHER' : 'QTK',
    }));
    await admin.post('/api/register').send(sent).expect(200);
    await buildUnit(db, { registered: false });
    const first = await admin.get('/api/register').query({ owner: 'QTK', limit: 2 }).expect(200);
    const rest = await admin
      .get('/api/register')
      .query({ owner: 'QTK', limit: 2, cursor: first.body.next })
      .expect(200);
    const ids = [...first.body.data, ...rest.body.data].map(
      (one: { unitId: string }) => one.unitId,
    );
    expect(ids).toEqual(['QTKX1', 'QTKX2', 'QTKX3']);
    expect(rest.body.next).toBeNull();
    expect((await admin.get('/api/register').expect(200)).body.data).toHaveLength(4);
  });
});

describe('taking off the register', () => {
  test('leaves the unit as any stranger, and nobody sees it', async () => {
    await admin.post('/api/register').send(car).expect(200);
    await admin.delete('/api/register/QTKX40127').expect(204);
    await admin.get('/api/register/QTKX40127').expect(404);
    await admin.delete('/api/register/QTKX40127').expect(404);
    expect(await visibleTo()).toEqual([]);
    expect(await models.Unit.findOne()).toMatchObject({ registered: false, ownerId: null });
    await admin.delete('/api/organisations/QTK').expect(204);
  });
});
