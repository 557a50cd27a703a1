import { beforeEach, describe, expect, test } from 'vitest';
import { createApp } from '../../server/app.js';
import { buildContext } from '../support/context.js';
import { useTestDatabase } from '../support/database.js';
import { buildPerson, signIn } from '../support/factories.js';
import { carTag } from '../support/ingest.js';
import {
  buildReworkYard,
  minutes,
  plannedRework,
  type ReworkYard,
} from '../support/rework-yard.js';

const db = useTestDatabase();
const context = buildContext(db);
const app = createApp(context, { clientDirectory: null });
const planned = () => plannedRework(context);
const nothing = { rebuilds: [], units: [] };
const EPC = '34140b8cac3aa24000000001';
let admin: Awaited<ReturnType<typeof signIn>>;
let yard: ReworkYard;

beforeEach(async () => {
  context.clock.set('2026-11-03T00:00:00Z');
  admin = await signIn(app, await buildPerson(db));
  yard = await buildReworkYard(context);
});

describe('the register', () => {
  const car = (number: number, changes: object = {}) => ({
    unit: `QTKX ${number}`,
    kind: 'car',
    ...changes,
  });

  test('a car that reads have named comes on with the very tags it has: its limits alone', async () => {
    await admin
      .post('/api/register')
      .send(car(1, { tags: [{ value: carTag(1) }] }))
      .expect(200);
    expect(await planned()).toEqual({ rebuilds: [], units: ['QTKX1'] });
    await yard.drain();
    await admin
      .post('/api/register')
      .send(car(1, { tags: [{ value: carTag(1) }] }))
      .expect(200);
    await admin
      .post('/api/register')
      .send(car(1, { carType: 'tank car' }))
      .expect(200);
    expect(await planned()).toEqual(nothing);
  });

  test('a tag that belongs to another car: around its passages, where it was read', async () => {
    await admin
      .post('/api/register')
      .send(car(7, { tags: [{ value: carTag(2) }] }))
      .expect(200);
    expect(await planned()).toEqual({
      rebuilds: [{ label: 'Register: QTKX 7', spans: [['EAST', 90, 150]] }],
      units: [],
    });
  });

  test('a tag that moves at an instant: only what was read from then on', async () => {
    await yard.send([
      [1, carTag(2), 500],
      [2, carTag(2), 500.02],
    ]);
    await yard.drain();
    await admin
      .post('/api/register')
      .send([car(2), car(7)])
      .expect(200);
    await yard.drain();
    const moved = { value: carTag(2), validFrom: minutes(400).toISOString() };
    await admin.post('/api/register/QTKX7/tags').send(moved).expect(200);
    const { rebuilds } = await planned();
    expect(rebuilds).toEqual([{ label: 'Tag put on QTKX 7', spans: [['EAST', 470, 530]] }]);
  });

  test('an EPC that nobody knew: the reads that were set aside for it', async () => {
    await yard.send([
      [3, EPC, 600],
      [4, EPC, 600.02],
      [5, EPC, 700],
    ]);
    await yard.drain();
    await admin
      .post('/api/register')
      .send(car(7, { tags: [{ value: EPC }] }))
      .expect(200);
    const { rebuilds } = await planned();
    expect(rebuilds.map(({ spans }) => spans)).toEqual([
      [
        ['GATE', 670, 730],
        ['WEST', 570, 630],
      ],
    ]);
    await yard.drain();
    await admin
      .post('/api/register')
      .send(car(7, { tags: [] }))
      .expect(200);
    expect((await planned()).rebuilds.map(({ spans }) => spans)).toEqual([
      [
        ['GATE', 670, 730],
        ['WEST', 570, 630],
      ],
    ]);
  });

  test('a car that turns out a locomotive: around all of its passages', async () => {
    await admin
      .post('/api/register')
      .send(car(3, { kind: 'locomotive' }))
      .expect(200);
    expect(await planned()).toEqual({
      rebuilds: [{ label: 'Register: QTKX 3', spans: [['WEST', 30, 90]] }],
      units: ['QTKX3'],
    });
  });

  test('a number that another car carries from an instant on', async () => {
    await admin
      .post('/api/register')
      .send([car(2), car(7)])
      .expect(200);
    await yard.drain();
    const from = minutes(60).toISOString();
    await admin.post('/api/register/QTKX2/renumber').send({ unit: 'QTKX 8', from }).expect(200);
    const { rebuilds } = await planned();
    expect(rebuilds).toEqual([{ label: 'QTKX 2 renumbered QTKX 8', spans: [['EAST', 90, 150]] }]);
  });

  test('taken off: its limits go', async () => {
    await admin.post('/api/register').send(car(4)).expect(200);
    await yard.drain();
    await admin.delete('/api/register/QTKX4').expect(204);
    expect(await planned()).toEqual({ rebuilds: [], units: ['QTKX4'] });
  });
});
