import request from 'supertest';
import { describe, expect, test, vi } from 'vitest';
import { createApp } from '../../server/app.js';
import { aarIdentity } from '../../server/domain/identifiers/identity.js';
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
import { placeUnit } from '../support/places.js';
import { buildWatch } from '../support/watches.js';

const db = useTestDatabase();
const HOUR = 3_600_000;

function scene() {
  const context = buildContext(db);
  const app = createApp(context);
  const now = context.clock.now();
  return { context, app, now, hoursAgo: (hours: number) => new Date(now.getTime() - hours * HOUR) };
}

async function ownerScene() {
  const { app, ...rest } = scene();
  const organisation = await buildOrganisation(db, { name: 'Quarry Tank' });
  const person = await buildPerson(db, { roles: ['owner'], organisation, name: 'Ada Quill' });
  return { ...rest, app, organisation, person, agent: await signIn(app, person) };
}

describe('setting a watch', () => {
  test('keeps it, tells whoever set it, and reads back what was sent', async () => {
    const { agent, person, organisation } = await ownerScene();
    const unit = await buildUnit(db, {
      owner: organisation,
      identity: aarIdentity('QTKX', 40127),
    });
    await placeUnit(db, unit, { state: 'unseen' });
    const { body, headers } = await agent
      .post('/api/watches')
      .send({
        name: ' My tank car ',
        kind: 'quiet',
        scope: { units: ['qtkx 040127'], marks: ['qtkx'], kinds: ['car'] },
      })
      .expect(201);
    expect(body.data).toMatchObject({
      name: 'My tank car',
      kind: 'quiet',
      scope: { units: ['QTKX40127'], marks: ['QTKX'], kinds: ['car'] },
      includeOnHand: false,
      hours: 72,
      recipients: { people: [person.id], addresses: [] },
      schedule: { at: 'once' },
      owner: { id: person.id, name: 'Ada Quill' },
      named: {
        units: [{ unitId: 'QTKX40127', display: 'QTKX 40127' }],
        people: [{ id: person.id, name: 'Ada Quill' }],
      },
      openAlerts: 0,
    });
    expect(body.can).toEqual({ update: true, delete: true });
    const again = await agent.get(headers.location as string).expect(200);
    expect(again.body).toEqual(body);
  });

  test('takes sites of a dispatcher by code', async () => {
    const { app } = scene();
    const site = await buildSite(db, { code: 'ALDER', name: 'Alder Bend Yard' });
    const dispatcher = await buildPerson(db, { roles: ['dispatcher'], sites: [site] });
    const agent = await signIn(app, dispatcher);
    const { body } = await agent
      .post('/api/watches')
      .send({ name: 'Long here', kind: 'dwell', hours: 48, scope: { sites: ['ALDER'] } })
      .expect(201);
    expect(body.data.scope).toEqual({ sites: ['ALDER'] });
    expect(body.data.named.sites).toEqual([{ code: 'ALDER', name: 'Alder Bend Yard' }]);
  });

  test('names every fault of the form at once', async () => {
    const { agent } = await ownerScene();
    const { body } = await agent
      .post('/api/watches')
      .send({
        name: 'Two\nlines',
        kind: 'overdue',
        scope: { sites: ['lower'], kinds: [], marks: ['TOOLONG'] },
        hours: 0,
        recipients: { addresses: ['not an address', 'a@b.example\r\nBcc: c@d.example'] },
        schedule: { at: 'daily' },
      })
      .expect(400);
    const pointers = body.errors.map((fault: { pointer: string }) => fault.pointer);
    expect(pointers.sort()).toEqual([
      '/hours',
      '/kind',
      '/name',
      '/recipients/addresses/0',
      '/recipients/addresses/1',
      '/schedule/at',
      '/scope/kinds',
      '/scope/marks/0',
      '/scope/sites/0',
    ]);
  });

  test('names what is not there and what is not for this person in the same words', async () => {
    const { agent, organisation, person } = await ownerScene();
    const own = await buildUnit(db, { owner: organisation });
    const foreign = await buildUnit(db, { identity: aarIdentity('QZZX', 1) });
    for (const unit of [own, foreign]) await placeUnit(db, unit, { state: 'unseen' });
    const stranger = await buildPerson(db, { roles: ['owner'] });
    const { body } = await agent
      .post('/api/watches')
      .send({
        name: 'Mixed',
        kind: 'quiet',
        scope: {
          units: [own.unitKey, 'QZZX1', 'QZZX2', 'ZQXU 305438 5', '40127'],
          owners: [organisation.id, foreign.ownerId],
          sites: ['NOWHERE'],
        },
        recipients: { people: [person.id, stranger.id, 999_999] },
      })
      .expect(400);
    expect(body.errors).toEqual([
      { pointer: '/scope/units/1', detail: 'is not one that you may see' },
      { pointer: '/scope/units/2', detail: 'is not one that you may see' },
      { pointer: '/scope/units/3', detail: 'ZQXU 305438 ends in 1, not 5.' },
      { pointer: '/scope/units/4', detail: 'needs its mark too' },
      { pointer: '/scope/owners/1', detail: 'is not one that you may see' },
      { pointer: '/scope/sites/0', detail: 'is not one of your sites' },
      { pointer: '/recipients/people/1', detail: 'is not one whom you may have told' },
      { pointer: '/recipients/people/2', detail: 'is not one whom you may have told' },
    ]);
  });

  test('refuses a dispatcher sites of others', async () => {
    const { app } = scene();
    const mine = await buildSite(db, { code: 'MINE' });
    await buildSite(db, { code: 'OTHERS' });
    const agent = await signIn(app, await buildPerson(db, { roles: ['clerk'], sites: [mine] }));
    const { body } = await agent
      .post('/api/watches')
      .send({ name: 'Long', kind: 'dwell', scope: { sites: ['MINE', 'OTHERS'] } })
      .expect(400);
    expect(body.errors).toEqual([
      { pointer: '/scope/sites/1', detail: 'is not one of your sites' },
    ]);
  });

  test('needs somebody signed in', async () => {
    const { app } = scene();
    await request(app).post('/api/watches').send({ name: 'x', kind: 'quiet' }).expect(401);
    await request(app).get('/api/watches').expect(401);
    await request(app).post('/api/watches/preview').send({ kind: 'quiet' }).expect(401);
  });
});

describe('the list of watches', () => {
  test('shows mine and those that tell me, newest first, page by page', async () => {
    const { agent, person } = await ownerScene();
    const other = await buildPerson(db, { roles: ['owner'] });
    const first = await buildWatch(db, person, { name: 'first' });
    await buildWatch(db, other, { name: 'foreign' });
    const told = await buildWatch(db, other, { name: 'told', people: [other, person] });
    const { body } = await agent.get('/api/watches?limit=1').expect(200);
    expect(body.data).toMatchObject([{ id: told.id, can: { update: false, delete: false } }]);
    const next = await agent.get(`/api/watches?limit=1&cursor=${body.next}`).expect(200);
    expect(next.body.data).toMatchObject([{ id: first.id, can: { update: true, delete: true } }]);
    expect(next.body.next).toBeNull();
  });

  test('costs the same number of queries for one watch and for twenty', async () => {
    const { organisation, person, agent } = await ownerScene();
    const site = await buildSite(db);
    const units = [await buildUnit(db, { owner: organisation }), await buildUnit(db)];
    const scope = { unitIds: units.map((unit) => unit.id), siteIds: [site.id] };
    const queries = [vi.spyOn(db.pool, 'query'), vi.spyOn(db.sequelize, 'query')];
    const costOf = async (watches: number) => {
      for (const spy of queries) spy.mockClear();
      const { body } = await agent.get('/api/watches').expect(200);
      expect(body.data).toHaveLength(watches);
      return queries.reduce((sum, spy) => sum + spy.mock.calls.length, 0);
    };
    await buildWatch(db, person, { scope });
    const one = await costOf(1);
    for (let index = 0; index < 19; index += 1) await buildWatch(db, person, { scope });
    expect(await costOf(20)).toBe(one);
    expect(one).toBeLessThan(12);
  });

  test('refuses what it does not know', async () => {
    const { agent } = await ownerScene();
    const { body } = await agent.get('/api/watches?limit=500&colour=red&cursor=x').expect(400);
    const pointers = body.errors.map((fault: { pointer: string }) => fault.pointer);
    expect(pointers.sort()).toEqual(['?colour', '?limit']);
    await agent.get('/api/watches?cursor=x').expect(400);
  });
});

describe('changing and ending a watch', () => {
  test('changes only what was sent', async () => {
    const { agent, person } = await ownerScene();
    const colleague = await buildPerson(db, {
      roles: ['owner'],
      organisation: await modelsOf(db.sequelize).Organisation.findByPk(person.organisationId ?? 0),
    });
    const watch = await buildWatch(db, person, { name: 'Before', hours: 72 });
    const { body } = await agent
      .patch(`/api/watches/${watch.id}`)
      .send({ hours: 24, recipients: { people: [colleague.id], addresses: ['Desk@Yard.example'] } })
      .expect(200);
    expect(body.data).toMatchObject({
      name: 'Before',
      hours: 24,
      recipients: { people: [colleague.id], addresses: ['desk@yard.example'] },
    });
  });

  test('is for whoever set it: 404 for strangers, 403 for those it tells', async () => {
    const { agent } = await ownerScene();
    const { app, person: told } = await ownerScene();
    const other = await buildPerson(db, { roles: ['owner'] });
    const watch = await buildWatch(db, other, { people: [told] });
    const toldAgent = await signIn(app, told);
    for (const [who, status] of [
      [agent, 404],
      [toldAgent, 403],
    ] as const) {
      await who.patch(`/api/watches/${watch.id}`).send({ hours: 5 }).expect(status);
      await who.delete(`/api/watches/${watch.id}`).expect(status);
    }
    await agent.get(`/api/watches/${watch.id}`).expect(404);
    const { body } = await toldAgent.get(`/api/watches/${watch.id}`).expect(200);
    expect(body.can).toEqual({ update: false, delete: false });
    await toldAgent.get('/api/watches/none').expect(404);
  });

  test('is for an administrator too, within what the owner of the watch may see', async () => {
    const { app, person, organisation } = await ownerScene();
    const foreign = await buildUnit(db);
    const own = await buildUnit(db, { owner: organisation });
    for (const unit of [foreign, own]) await placeUnit(db, unit, { state: 'unseen' });
    const watch = await buildWatch(db, person);
    const admin = await signIn(app, await buildPerson(db));
    const { body } = await admin
      .patch(`/api/watches/${watch.id}`)
      .send({ scope: { units: [own.unitKey, foreign.unitKey] } })
      .expect(400);
    expect(body.errors).toHaveLength(1);
    expect(body.errors[0].pointer).toBe('/scope/units/1');
  });

  test('an ended watch is gone', async () => {
    const { agent, person } = await ownerScene();
    const watch = await buildWatch(db, person);
    await agent.delete(`/api/watches/${watch.id}`).expect(204);
    await agent.get(`/api/watches/${watch.id}`).expect(404);
    await agent.delete(`/api/watches/${watch.id}`).expect(404);
    expect((await agent.get('/api/watches').expect(200)).body.data).toEqual([]);
  });
});

describe('a preview', () => {
  test('counts what a quiet watch covers and would raise, longest first', async () => {
    const { agent, organisation, hoursAgo } = await ownerScene();
    const site = await buildSite(db, { code: 'ALDER', name: 'Alder Bend Yard' });
    const place = async (number: number, hours: number, state: 'enRoute' | 'onHand') => {
      const identity = aarIdentity('QTKX', number);
      const unit = await buildUnit(db, { owner: organisation, identity });
      const at = hoursAgo(hours);
      await placeUnit(
        db,
        unit,
        state === 'onHand' ? { state, site, at, arrivedAt: at } : { state, site, at },
      );
    };
    await place(1, 80, 'enRoute');
    await place(2, 100.55, 'enRoute');
    await place(3, 10, 'enRoute');
    await place(4, 200, 'onHand');
    const foreign = await buildUnit(db);
    await placeUnit(db, foreign, { state: 'enRoute', site, at: hoursAgo(500) });
    const { body } = await agent.post('/api/watches/preview').send({ kind: 'quiet' }).expect(200);
    expect(body.data).toMatchObject({ covers: 4, wouldRaise: 2 });
    expect(body.data.first).toEqual([
      {
        unitId: 'QTKX2',
        display: 'QTKX 2',
        kind: 'car',
        site: { code: 'ALDER', name: 'Alder Bend Yard' },
        since: hoursAgo(100.55).toISOString(),
        atLeast: false,
        hours: 100.5,
      },
      expect.objectContaining({ unitId: 'QTKX1', hours: 80 }),
    ]);
    const withStanding = await agent
      .post('/api/watches/preview')
      .send({ kind: 'quiet', includeOnHand: true })
      .expect(200);
    expect(withStanding.body.data).toMatchObject({ covers: 4, wouldRaise: 3 });
  });

  test('is of the same eye as the watch: faults with pointers', async () => {
    const { agent } = await ownerScene();
    const { body } = await agent
      .post('/api/watches/preview')
      .send({ kind: 'dwell', scope: { sites: ['NOWHERE'] } })
      .expect(400);
    expect(body.errors[0].pointer).toBe('/scope/sites/0');
  });
});
