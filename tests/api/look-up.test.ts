import request from 'supertest';
import { beforeEach, expect, test } from 'vitest';
import { createApp } from '../../server/app.js';
import { lookUpAnswer } from '../../server/contract/look-up.js';
import { aarIdentity, isoIdentity } from '../../server/domain/identifiers/identity.js';
import { modelsOf } from '../../server/models/index.js';
import { buildContext } from '../support/context.js';
import { useTestDatabase } from '../support/database.js';
import {
  buildOrganisation,
  buildPerson,
  buildSite,
  buildUnit,
  signIn,
} from '../support/factories.js';
import { placeUnit } from '../support/histories.js';

const db = useTestDatabase();

beforeEach(async () => {
  await buildSite(db, { code: 'ALDER', name: 'Alder Bend Yard' });
  await buildSite(db, { code: 'ALD2', name: '100 % Siding', kind: 'industry' });
  const owner = await buildOrganisation(db, { name: 'Quarrel Tank Leasing' });
  const tank = { owner, carType: 'tank car' };
  const tankCar = await buildUnit(db, { identity: aarIdentity('QTKX', 40127), ...tank });
  const { Identity } = modelsOf(db.sequelize);
  const former = { ...aarIdentity('QBLX', 55), validFrom: null, validTo: new Date('2020-01-01') };
  await Identity.create({ ...former, unitId: tankCar.id });
  await placeUnit(db, tankCar);
  await placeUnit(db, await buildUnit(db, { identity: aarIdentity('QTKX', 401270), owner }));
  const box = { identity: isoIdentity('ZQXU', 305438), kind: 'container', owner: null };
  await placeUnit(db, await buildUnit(db, { ...box, registered: false }));
});

async function lookUp(q: string, values: Parameters<typeof buildPerson>[1] = {}) {
  const agent = await signIn(createApp(buildContext(db)), await buildPerson(db, values));
  const { body } = await agent.get('/api/look-up').query({ q }).expect(200);
  expect(lookUpAnswer.parse(body)).toEqual(body);
  const { hits, problem } = body.data as { hits: { id: string }[]; problem: string | null };
  return { hits, problem, ids: hits.map((hit) => hit.id) };
}

test('a number alone finds its car first, then those it begins', async () => {
  const { hits, problem } = await lookUp('40127');
  expect(problem).toBeNull();
  expect(hits).toEqual([
    {
      kind: 'equipment',
      id: 'QTKX40127',
      display: 'QTKX 40127',
      formerly: null,
      detail: 'tank car, Quarrel Tank Leasing, formerly QBLX 55',
    },
    {
      kind: 'equipment',
      id: 'QTKX401270',
      display: 'QTKX 401270',
      formerly: null,
      detail: 'car, Quarrel Tank Leasing',
    },
  ]);
});

test.each([
  ['qtkx 040127', ['QTKX40127', 'QTKX401270']],
  ['zqxu 305438', ['ZQXU3054381']],
  ['5438', ['ZQXU3054381']],
  ['QBLX 55', ['QTKX40127']],
  ['alder', ['ALDER']],
  ['ald', ['ALDER', 'ALD2']],
  ['bend', ['ALDER']],
  ['0 %', ['ALD2']],
])('%s', async (text, expected) => {
  const { ids, problem } = await lookUp(text);
  expect(ids).toEqual(expected);
  expect(problem).toBeNull();
});

test.each([
  ['ZQXU 305438 5', 'ZQXU 305438 ends in 1, not 5.'],
  ['QTKX 99999', 'Nothing that you may see goes by “QTKX 99999”.'],
  ['nowhere', 'Nothing that you may see goes by “nowhere”.'],
  ['🚂', 'Nothing that you may see goes by “🚂”.'],
  ['_', 'Nothing that you may see goes by “_”.'],
])('%s is answered with what is wrong', async (text, sentence) => {
  expect(await lookUp(text)).toMatchObject({ ids: [], problem: sentence });
});

test('an owner finds no car of another, and a clerk no site but their own', async () => {
  const organisation = await buildOrganisation(db);
  expect((await lookUp('40127', { roles: ['owner'], organisation })).ids).toEqual([]);
  const sites = [await buildSite(db, { code: 'BEND', name: 'Osprey Bend' })];
  expect((await lookUp('bend', { roles: ['clerk'], sites })).ids).toEqual(['BEND']);
});

test('nothing, too much and unknown parameters are 400; without a sign-in 401', async () => {
  const app = createApp(buildContext(db));
  const agent = await signIn(app, await buildPerson(db));
  for (const query of [{}, { q: ' ' }, { q: 'x'.repeat(201) }]) {
    const { body } = await agent.get('/api/look-up').query(query).expect(400);
    expect(body.errors).toMatchObject([{ pointer: '?q' }]);
  }
  await agent.get('/api/look-up?q=1&kind=site').expect(400);
  await request(app).get('/api/look-up?q=1').expect(401);
});
