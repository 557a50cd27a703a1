import { beforeEach, describe, expect, test } from 'vitest';
import { createApp } from '../../server/app.js';
import { encodeAei } from '../../server/domain/identifiers/aei.js';
import { ingestReads } from '../../server/ingest/ingest-reads.js';
import { modelsOf } from '../../server/models/index.js';
import type { Organisation } from '../../server/models/organisation.js';
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
import { buildReporter, postReports } from '../support/reports.js';

const db = useTestDatabase();
const models = modelsOf(db.sequelize);
const NOW = new Date('2026-03-10T12:00:00.000Z');
const MARCH_5 = '2026-03-05T00:00:00.000Z';
const hourOf = (day: number) => `2026-03-${String(day).padStart(2, '0')}T06:00:00.000Z`;
const TAG = encodeAei({ groupCode: 19, initial: 'QTKX', number: 1, side: 'left' });

let app: ReturnType<typeof createApp>;
let context: ReturnType<typeof buildContext>;
let admin: Awaited<ReturnType<typeof signIn>>;
let owner: Organisation;
let alder: Site;

beforeEach(async () => {
  context = buildContext(db);
  context.clock.set(NOW);
  app = createApp(context, { clientDirectory: null });
  admin = await signIn(app, await buildPerson(db));
  owner = await buildOrganisation(db, { code: 'QTK' });
  alder = await buildSite(db, { code: 'ALDER' });
  const lead = await buildReadPoint(db, { site: alder, code: 'N1' });
  await buildAntenna(db, { readPoint: lead, number: 1 });
});

const register = (sent: object) =>
  admin
    .post('/api/register')
    .send({ kind: 'car', owner: 'QTK', ...sent })
    .expect(200);
const renumber = (unitId: string, unit: string, from = MARCH_5) =>
  admin.post(`/api/register/${unitId}/renumber`).send({ unit, from }).expect(200);

/** Everything that waits, rebuilds of what the register changed included. */
async function project(): Promise<void> {
  const projector = createProjector(context);
  await projector.drain();
  await projector.stop();
  const waiting = await db.pool.query<object[]>("SELECT id FROM rebuilds WHERE state <> 'done'");
  expect(waiting).toEqual([]);
}

async function read(tag: string, ...instants: string[]): Promise<void> {
  const reads = instants.map((readAt) => ({ antenna: 1, tag, readAt }));
  const answer = await ingestReads(db, { site: alder, reads, receivedAt: NOW });
  expect(answer).toMatchObject({ accepted: instants.length, held: 0 });
  await project();
}

async function seen(unitId: string): Promise<string[]> {
  const { body } = await admin.get(`/api/equipment/${unitId}/sightings`).expect(200);
  return body.data.map((sighting: { startedAt: string }) => sighting.startedAt).sort();
}

describe('a former number', () => {
  test('leads to the car that carried it, as long as nobody else was read under it', async () => {
    await register({ unit: 'QTKX 1' });
    await read('QTKX 1', hourOf(4));
    await renumber('QTKX1', 'QBLX 77');
    await project();
    const moved = await admin.get('/api/equipment/QTKX1').expect(308);
    expect(moved.headers['location']).toBe('/api/equipment/QBLX77');
    const below = await admin.get('/api/equipment/QTKX1/doubts?limit=5').expect(308);
    expect(below.headers['location']).toBe('/api/equipment/QBLX77/doubts?limit=5');
    const { body } = await admin.get('/api/equipment/QBLX77').expect(200);
    expect(body.data.identities).toMatchObject([
      { unitId: 'QBLX77', current: true, validFrom: MARCH_5, validTo: null },
      { unitId: 'QTKX1', current: false, validFrom: null, validTo: MARCH_5 },
    ]);
    expect(await seen('QBLX77')).toEqual([hourOf(4)]);
  });

  test('opens who carries it now, and for its owner still the car that did', async () => {
    await register({ unit: 'QTKX 1' });
    await renumber('QTKX1', 'QBLX 77');
    await read('QTKX 1', hourOf(4), hourOf(6));
    const stranger = await admin.get('/api/equipment/QTKX1').expect(200);
    expect(stranger.body.data).toMatchObject({ unitId: 'QTKX1', registered: false });
    const own = await signIn(app, await buildPerson(db, { roles: ['owner'], organisation: owner }));
    const moved = await own.get('/api/equipment/QTKX1').expect(308);
    expect(moved.headers['location']).toBe('/api/equipment/QBLX77');
    const other = await signIn(app, await buildPerson(db, { roles: ['owner'] }));
    await other.get('/api/equipment/QTKX1').expect(404);
    await other.get('/api/equipment/QBLX77').expect(404);
  });

  test('is found by look-up, which says what the car is called now', async () => {
    await register({ unit: 'QTKX 40127', carType: 'tank car' });
    await renumber('QTKX40127', 'QBLX 77');
    const { body } = await admin.get('/api/look-up').query({ q: '40127' }).expect(200);
    expect(body.data.hits).toEqual([
      {
        kind: 'equipment',
        id: 'QBLX77',
        display: 'QBLX 77',
        formerly: 'QTKX 40127',
        detail: expect.stringContaining('tank car'),
      },
    ]);
    expect(body.data.hits[0].detail).not.toContain('formerly');
    await register({ unit: 'QTKX 40127' });
    const both = await admin.get('/api/look-up').query({ q: 'QTKX 40127' }).expect(200);
    const hits = both.body.data.hits.map((hit: { id: string; formerly: string | null }) => [
      hit.id,
      hit.formerly,
    ]);
    expect(hits).toEqual([
      ['QTKX40127', null],
      ['QBLX77', 'QTKX 40127'],
    ]);
  });
});

test('a watch of a mark covers who carries it now, not who did', async () => {
  await register({ unit: 'QTKX 1' });
  await read('QTKX 1', hourOf(4));
  const covers = async (mark: string) => {
    const watch = { kind: 'quiet', scope: { marks: [mark] } };
    const { body } = await admin.post('/api/watches/preview').send(watch).expect(200);
    return body.data.covers as number;
  };
  expect([await covers('QTKX'), await covers('QBLX')]).toEqual([1, 0]);
  await renumber('QTKX1', 'QBLX 77');
  await project();
  expect([await covers('QTKX'), await covers('QBLX')]).toEqual([0, 1]);
});

describe('what was read before the register said so', () => {
  test('goes over to another car from the instant on at which a tag was moved', async () => {
    await register({ unit: 'QTKX 1', tags: [{ value: TAG, side: 'left' }] });
    await register({ unit: 'QTKX 2', tags: [] });
    await read(TAG, hourOf(4), hourOf(6), hourOf(8));
    expect(await seen('QTKX1')).toEqual([hourOf(4), hourOf(6), hourOf(8)]);
    await admin
      .post('/api/register/QTKX2/tags')
      .send({ value: TAG, validFrom: MARCH_5, takeFrom: true })
      .expect(200);
    await project();
    expect(await seen('QTKX1')).toEqual([hourOf(4)]);
    expect(await seen('QTKX2')).toEqual([hourOf(6), hourOf(8)]);
  });

  test('goes over from a stranger to the car that took its number', async () => {
    await register({ unit: 'QTKX 1' });
    await read('QBLX 77', hourOf(4), hourOf(6));
    await renumber('QTKX1', 'QBLX 77');
    await project();
    expect(await seen('QBLX77')).toEqual([hourOf(6)]);
    const [stranger] = await models.Unit.findAll({ where: { unitKey: 'QBLX77' } });
    const passages = await db.pool.query<{ first_at: Date }[]>(
      'SELECT first_at FROM passages WHERE unit_id = ?',
      [stranger?.id],
    );
    expect(passages).toEqual([{ first_at: new Date(hourOf(4)) }]);
  });

  test('goes over from a stranger to the car that once had its number', async () => {
    await read('QTKX 1', hourOf(4), hourOf(6));
    await register({ unit: 'QBLX 77', formerly: [{ unit: 'QTKX 1', validTo: MARCH_5 }] });
    await project();
    expect(await seen('QBLX77')).toEqual([hourOf(4)]);
    expect(await seen('QTKX1')).toEqual([hourOf(6)]);
  });

  test('goes over to a stranger where a car gave up the number', async () => {
    await register({ unit: 'QTKX 1' });
    await read('QTKX 1', hourOf(4), hourOf(6));
    await renumber('QTKX1', 'QBLX 77');
    await project();
    expect(await seen('QBLX77')).toEqual([hourOf(4)]);
    expect(await seen('QTKX1')).toEqual([hourOf(6)]);
    await register({ unit: 'QTKX 1', carType: 'boxcar' });
    await project();
    expect(await seen('QTKX1')).toEqual([hourOf(6)]);
    expect(await models.Unit.count()).toBe(2);
  });
});

describe('what was reported before the register said so', () => {
  /** Sites where a car has stood, by what it is called now. */
  async function stays(unitId: string) {
    const { body } = await admin.get(`/api/equipment/${unitId}/movements`).expect(200);
    return body.data.stays.map((stay: { arrivedAt: string }) => stay.arrivedAt);
  }

  test('goes with the number at the time', async () => {
    const { token } = await buildReporter(context);
    await register({ unit: 'QTKX 1' });
    const reports = [3, 8].map((day) => ({
      reference: String(day),
      unit: 'QTKX 1',
      event: 'arrived',
      at: hourOf(day),
      site: 'ALDER',
    }));
    await postReports(app, token, { source: 'line', reports }).expect(200);
    await project();
    expect(await stays('QTKX1')).toContain(hourOf(3));
    await renumber('QTKX1', 'QBLX 77');
    await project();
    expect(await stays('QBLX77')).toEqual([hourOf(3)]);
    expect(await stays('QTKX1')).toEqual([hourOf(8)]);
  });
});
