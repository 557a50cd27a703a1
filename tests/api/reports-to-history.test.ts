import { randomUUID } from 'node:crypto';
import { beforeEach, describe, expect, test } from 'vitest';
import { aarIdentity } from '../../server/domain/identifiers/identity.js';
import type { Organisation } from '../../server/models/organisation.js';
import { createProjector } from '../../server/projections/projector.js';
import { replaceReaderToken } from '../../server/services/replace-reader-token.js';
import { buildClock, buildContext } from '../support/context.js';
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
import { buildIngestApp, buildReader, carTag, postReads } from '../support/ingest.js';
import { buildReporter, postReports } from '../support/reports.js';

const db = useTestDatabase();
const clock = buildClock('2026-12-01T12:00:00Z');
const context = buildContext(db, { clock });
const app = buildIngestApp(context);
const at = (time: string) => `2026-12-01T${time}:00.000Z`;

let owner: Organisation;
let token: string;

/** A plant that no reader sees, and a car of an owner that nothing is known of yet. */
beforeEach(async () => {
  owner = await buildOrganisation(db);
  await buildSite(db, { code: 'PLANT', kind: 'industry', returnHours: 1 });
  await buildUnit(db, { identity: aarIdentity('QTKX', 1), owner, tags: [{ value: carTag(1) }] });
  await db.pool.query('UPDATE config_state SET version = version + 1 WHERE id = 1');
  ({ token } = await buildReporter(context));
});

async function fold(): Promise<void> {
  const projector = createProjector(context);
  await projector.drain();
  await projector.stop();
}

async function report(...reports: object[]): Promise<void> {
  const { body } = await postReports(app, token, { source: 'car-desk', reports }).expect(200);
  expect(body).toMatchObject({ accepted: reports.length });
}

const said = (reference: string, event: string, time: string, more: object = {}) => ({
  ...{ reference, event, at: at(time), unit: 'QTKX 1', site: 'PLANT' },
  ...more,
});

async function asOwner() {
  return signIn(app, await buildPerson(db, { roles: ['owner'], organisation: owner }));
}

async function historyOf(unitId: string) {
  const admin = await signIn(app, await buildPerson(db));
  const { body } = await admin.get(`/api/equipment/${unitId}/movements`).expect(200);
  return body.data;
}

describe('a car that was reported arrived where no reader sees it', () => {
  test('stands there as reported, for its owner too', async () => {
    await report(said('a', 'arrived', '08:00'));
    await fold();
    const person = await asOwner();
    const { body } = await person.get('/api/equipment/QTKX1').expect(200);
    expect(body.data).toMatchObject({
      state: 'onHand',
      lastSeen: { site: { code: 'PLANT' }, readPoint: null, at: at('08:00'), basis: 'report' },
      stay: { arrivedAt: at('08:00'), dwellMinutes: 240, atLeast: false },
    });
    const { body: moves } = await person.get('/api/equipment/QTKX1/movements').expect(200);
    expect(moves.data.stays).toMatchObject([
      {
        site: { code: 'PLANT' },
        arrivedAt: at('08:00'),
        arrivalBasis: 'report',
        arrivalBounds: null,
        departedAt: null,
      },
    ]);
    const { body: list } = await person.get('/api/equipment?site=PLANT&state=onHand').expect(200);
    expect(list.data).toHaveLength(1);
  });

  test('leaves when it is reported departed, and goes on to where a reader sees it', async () => {
    const { site, token: reader } = await buildReader(db);
    await report(said('a', 'arrived', '06:00'), said('b', 'departed', '07:30'));
    const read = { antenna: 1, tag: carTag(1), readAt: at('11:00') };
    await postReads(app, reader, { reads: [read] }).expect(200);
    await fold();
    const { stays, legs } = await historyOf('QTKX1');
    expect(stays[0]).toMatchObject({
      ...{ arrivedAt: at('06:00'), arrivalBasis: 'report' },
      ...{ departedAt: at('07:30'), departureBasis: 'report', departureBounds: null },
    });
    expect(legs).toMatchObject([{ from: { code: 'PLANT' }, departedAt: at('07:30') }]);
    expect(stays[1]).toMatchObject({ site: { code: site.code } });
  });

  test('of which nobody ever heard is made, and stands there for the administrator', async () => {
    await report(said('a', 'arrived', '08:00', { unit: 'QZZX 77' }));
    await fold();
    expect((await historyOf('QZZX77')).stays).toMatchObject([{ site: { code: 'PLANT' } }]);
    const person = await asOwner();
    await person.get('/api/equipment/QZZX77').expect(404);
  });

  test('has one history, in whatever order and portions its reports come', async () => {
    const reports = [
      said('a', 'arrived', '02:00'),
      said('b', 'placed', '03:00'),
      said('c', 'departed', '05:00'),
      said('d', 'arrived', '09:00'),
    ];
    await report(...reports);
    await fold();
    const expected = await historyOf('QTKX1');
    expect(expected.stays).toHaveLength(2);
    for (const order of [
      [3, 2, 1, 0],
      [1, 3, 0, 2],
      [2, 0, 3, 1],
    ]) {
      for (const table of [
        'movement_reports',
        'work',
        'stays',
        'legs',
        'last_seen',
        'unit_folds',
      ]) {
        await db.pool.query(`DELETE FROM ${table}`);
      }
      for (const place of order) {
        await report(reports[place] ?? {});
        await fold();
      }
      await postReports(app, token, { source: 'car-desk', reports }).expect(200);
      await fold();
      expect(await historyOf('QTKX1')).toEqual(expected);
    }
  });
});

describe('a ghost: a car that stands in a yard by what was read, and does not', () => {
  async function ghost() {
    const yard = await buildSite(db, { code: 'ALDER' });
    const lead = await buildReadPoint(db, { site: yard, code: 'LEAD' });
    await buildAntenna(db, { readPoint: lead, number: 1, offsetM: -3, side: 'left' });
    await buildAntenna(db, { readPoint: lead, number: 2, offsetM: 3, side: 'left' });
    const reader = await replaceReaderToken(context, yard.id);
    await db.pool.query('UPDATE config_state SET version = version + 1 WHERE id = 1');
    const reads = [1, 2].map((antenna, second) => {
      return { antenna, tag: carTag(1), readAt: `2026-12-01T03:00:0${second}.000Z` };
    });
    await postReads(app, reader, { reads }).expect(200);
    await fold();
    const clerk = await signIn(app, await buildPerson(db, { roles: ['clerk'], sites: [yard] }));
    expect((await historyOf('QTKX1')).stays).toMatchObject([
      { arrivalBasis: 'read', departedAt: null },
    ]);
    return clerk;
  }

  test('has left once a clerk says it is not there, and stands there again when that is taken back', async () => {
    const clerk = await ghost();
    const id = randomUUID();
    const gone = { id, unit: 'QTKX 1', at: at('10:00'), seen: false };
    const path = '/api/sites/ALDER/hand-reports';
    await clerk
      .post(path)
      .send({ track: '7', reports: [gone] })
      .expect(200);
    await fold();
    const [left] = (await historyOf('QTKX1')).stays;
    expect(left).toMatchObject({ departureBasis: 'hand', departedAt: at('10:00') });
    expect(left.departureBounds).toEqual({
      earliest: '2026-12-01T03:00:01.000Z',
      latest: at('10:00'),
    });
    const { body } = await clerk.get('/api/equipment/QTKX1').expect(200);
    expect(body.data.state).not.toBe('onHand');

    await clerk
      .post(`${path}/retractions`)
      .send({ ids: [id] })
      .expect(200);
    await fold();
    expect((await historyOf('QTKX1')).stays).toMatchObject([
      { departedAt: null, departureBasis: null },
    ]);
    const { body: again } = await clerk.get('/api/equipment/QTKX1').expect(200);
    expect(again.data).toMatchObject({ state: 'onHand', lastSeen: { basis: 'read' } });
  });

  test('that is seen after all stays, and is last known by eye, on that track', async () => {
    const clerk = await ghost();
    const here = { id: randomUUID(), unit: 'QTKX 1', at: at('10:00'), seen: true };
    const sent = { track: '7', reports: [here] };
    await clerk.post('/api/sites/ALDER/hand-reports').send(sent).expect(200);
    await fold();
    const { body } = await clerk.get('/api/equipment/QTKX1').expect(200);
    expect(body.data).toMatchObject({
      state: 'onHand',
      lastSeen: { site: { code: 'ALDER' }, track: '7', at: at('10:00'), basis: 'hand' },
      stay: { arrivedAt: '2026-12-01T03:00:00.000Z' },
    });
  });
});
