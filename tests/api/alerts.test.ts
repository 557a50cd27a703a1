import request from 'supertest';
import { describe, expect, test, vi } from 'vitest';
import { createApp } from '../../server/app.js';
import { aarIdentity } from '../../server/domain/identifiers/identity.js';
import { evaluateWatches } from '../../server/jobs/evaluate-watches.js';
import { modelsOf } from '../../server/models/index.js';
import type { Organisation } from '../../server/models/organisation.js';
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

/** An owner and a yard at 12:00 of an ordinary day. */
async function scene() {
  const context = buildContext(db);
  const { clock } = context;
  const app = createApp(context);
  const organisation = await buildOrganisation(db);
  const person = await buildPerson(db, { roles: ['owner'], organisation, name: 'Ada Quill' });
  const site = await buildSite(db, { code: 'ALDER', name: 'Alder Bend Yard' });
  const hoursAgo = (hours: number) => new Date(clock.now().getTime() - hours * HOUR);
  return { context, clock, app, organisation, person, site, hoursAgo };
}

const car = (number: number, owner: Organisation | null, more: object = {}) =>
  buildUnit(db, { identity: aarIdentity('QTKX', number), owner, ...more });

/** What stands in the table of alerts, without ids, in order of raising. */
async function alertsNow() {
  const { Alert } = modelsOf(db.sequelize);
  const alerts = await Alert.findAll({ order: ['id'] });
  return alerts.map(({ unitId, state, sinceAt, siteId, clearedBecause }) => ({
    unitId,
    state,
    sinceAt,
    siteId,
    clearedBecause,
  }));
}

describe('a quiet watch', () => {
  test('raises once what has gone quiet, and clears it at the next read', async () => {
    const { context, clock, organisation, person, site, hoursAgo } = await scene();
    const unit = await car(1, organisation);
    await placeUnit(db, unit, { state: 'enRoute', site, at: hoursAgo(71.9) });
    await buildWatch(db, person);
    expect(await evaluateWatches(context)).toEqual({ raised: 0, cleared: 0 });
    clock.advance(HOUR);
    expect(await evaluateWatches(context)).toEqual({ raised: 1, cleared: 0 });
    clock.advance(HOUR);
    expect(await evaluateWatches(context)).toEqual({ raised: 0, cleared: 0 });
    const readAt = clock.now();
    await placeUnit(db, unit, { state: 'enRoute', site, at: readAt });
    clock.advance(1_000);
    expect(await evaluateWatches(context)).toEqual({ raised: 0, cleared: 1 });
    expect(await evaluateWatches(context)).toEqual({ raised: 0, cleared: 0 });
    expect(await alertsNow()).toMatchObject([
      { unitId: unit.id, state: 'cleared', siteId: site.id, clearedBecause: 'read' },
    ]);
    clock.advance(73 * HOUR);
    expect(await evaluateWatches(context)).toEqual({ raised: 1, cleared: 0 });
    expect(await alertsNow()).toMatchObject([
      { state: 'cleared' },
      { state: 'open', sinceAt: readAt },
    ]);
  });

  test('leaves standing cars alone unless asked', async () => {
    const { context, organisation, person, site, hoursAgo } = await scene();
    const unit = await car(1, organisation);
    const at = hoursAgo(100);
    await placeUnit(db, unit, { state: 'onHand', site, at, arrivedAt: at });
    await buildWatch(db, person);
    const asking = await buildWatch(db, person, { includeOnHand: true });
    expect(await evaluateWatches(context)).toEqual({ raised: 1, cleared: 0 });
    const { Alert } = modelsOf(db.sequelize);
    expect(await Alert.count({ where: { watchId: asking.id } })).toBe(1);
  });

  test('leaves out what was never read, locomotives, end-of-train devices and strangers', async () => {
    const { context, organisation, site, hoursAgo } = await scene();
    const admin = await buildPerson(db);
    const at = hoursAgo(100);
    const plain = await car(1, organisation);
    const engine = await car(2, organisation, { kind: 'locomotive' });
    const marker = await car(3, organisation, { kind: 'endOfTrain' });
    const stranger = await car(4, null, { registered: false });
    for (const unit of [plain, engine, marker, stranger]) {
      await placeUnit(db, unit, { state: 'enRoute', site, at });
    }
    await placeUnit(db, await car(5, organisation), { state: 'unseen' });
    const every = await buildWatch(db, admin);
    const engines = await buildWatch(db, admin, { scope: { kinds: ['locomotive'] } });
    const named = await buildWatch(db, admin, { scope: { unitIds: [marker.id, stranger.id] } });
    await evaluateWatches(context);
    const { Alert } = modelsOf(db.sequelize);
    const raisedBy = async (watch: { id: number }) =>
      (await Alert.findAll({ where: { watchId: watch.id }, order: ['unitId'] })).map(
        (alert) => alert.unitId,
      );
    expect(await raisedBy(every)).toEqual([plain.id]);
    expect(await raisedBy(engines)).toEqual([engine.id]);
    expect(await raisedBy(named)).toEqual([marker.id, stranger.id]);
  });

  test('goes by marks, owners and sites of its scope', async () => {
    const { context, organisation, person, site, hoursAgo } = await scene();
    const elsewhere = await buildSite(db);
    const at = hoursAgo(100);
    const here = await car(1, organisation);
    const there = await car(2, organisation);
    const other = await buildUnit(db, {
      owner: organisation,
      identity: aarIdentity('QBBX', 3),
    });
    await placeUnit(db, here, { state: 'enRoute', site, at });
    await placeUnit(db, there, { state: 'enRoute', site: elsewhere, at });
    await placeUnit(db, other, { state: 'enRoute', site, at });
    await buildWatch(db, person, {
      scope: { marks: ['QTKX'], siteIds: [site.id], ownerIds: [organisation.id] },
    });
    await evaluateWatches(context);
    expect(await alertsNow()).toMatchObject([{ unitId: here.id }]);
  });

  test('sees only what its owner may see now, and drops what they may no longer see', async () => {
    const { context, organisation, person, site, hoursAgo } = await scene();
    const at = hoursAgo(100);
    const own = await car(1, organisation);
    const foreign = await car(2, await buildOrganisation(db));
    for (const unit of [own, foreign]) await placeUnit(db, unit, { state: 'enRoute', site, at });
    await buildWatch(db, person);
    await evaluateWatches(context);
    expect(await alertsNow()).toMatchObject([{ unitId: own.id, state: 'open' }]);
    await own.update({ ownerId: foreign.ownerId });
    await placeUnit(db, own, { state: 'enRoute', site, at });
    expect(await evaluateWatches(context)).toEqual({ raised: 0, cleared: 1 });
    expect(await alertsNow()).toMatchObject([{ clearedBecause: 'changed' }]);
  });

  test('a late read that leaves it quiet corrects the facts and keeps the alert', async () => {
    const { context, organisation, person, site, hoursAgo } = await scene();
    const unit = await car(1, organisation);
    await placeUnit(db, unit, { state: 'enRoute', site, at: hoursAgo(100) });
    await buildWatch(db, person);
    await evaluateWatches(context);
    const lateSite = await buildSite(db);
    const at = hoursAgo(90);
    await placeUnit(db, unit, { state: 'enRoute', site: lateSite, at });
    expect(await evaluateWatches(context)).toEqual({ raised: 0, cleared: 0 });
    expect(await alertsNow()).toMatchObject([{ state: 'open', siteId: lateSite.id, sinceAt: at }]);
  });

  test('a silence that began after the alert is another one', async () => {
    const { context, clock, organisation, person, site, hoursAgo } = await scene();
    const unit = await car(1, organisation);
    await placeUnit(db, unit, { state: 'enRoute', site, at: hoursAgo(100) });
    await buildWatch(db, person);
    await evaluateWatches(context);
    clock.advance(24 * HOUR);
    await placeUnit(db, unit, { state: 'enRoute', site, at: clock.now() });
    clock.advance(80 * HOUR);
    expect(await evaluateWatches(context)).toEqual({ raised: 1, cleared: 1 });
    expect(await alertsNow()).toMatchObject([
      { state: 'cleared', clearedBecause: 'read' },
      { state: 'open' },
    ]);
  });
});

describe('a dwell watch', () => {
  async function yardScene() {
    const rest = await scene();
    const other = await buildSite(db, { code: 'OTHER' });
    const dispatcher = await buildPerson(db, { roles: ['dispatcher'], sites: [rest.site] });
    return { ...rest, other, dispatcher };
  }

  test('raises anything that stands too long at the sites of a dispatcher, strangers too', async () => {
    const { context, organisation, site, other, dispatcher, hoursAgo } = await yardScene();
    const long = await car(1, organisation);
    const stranger = await car(2, null, { registered: false });
    const short = await car(3, organisation);
    const elsewhere = await car(4, organisation);
    const engine = await car(5, organisation, { kind: 'locomotive' });
    const stand = (arrivedAt: Date, where = site) =>
      ({ state: 'onHand', site: where, at: arrivedAt, arrivedAt }) as const;
    await placeUnit(db, long, stand(hoursAgo(49)));
    await placeUnit(db, stranger, { state: 'onHand', site, at: hoursAgo(60), arrivedAt: null });
    await placeUnit(db, short, stand(hoursAgo(47)));
    await placeUnit(db, elsewhere, stand(hoursAgo(90), other));
    await placeUnit(db, engine, stand(hoursAgo(90)));
    await buildWatch(db, dispatcher, { kind: 'dwell', hours: 48 });
    expect(await evaluateWatches(context)).toEqual({ raised: 2, cleared: 0 });
    expect(await evaluateWatches(context)).toEqual({ raised: 0, cleared: 0 });
    const { Alert } = modelsOf(db.sequelize);
    const alerts = await Alert.findAll({ order: ['unitId'] });
    expect(alerts).toMatchObject([
      { unitId: long.id, atLeast: false, sinceAt: hoursAgo(49), siteId: site.id },
      { unitId: stranger.id, atLeast: true, sinceAt: hoursAgo(60) },
    ]);
  });

  test('clears when the car has left for certain, not while the departure is provisional', async () => {
    const { context, clock, organisation, site, dispatcher, hoursAgo } = await yardScene();
    const unit = await car(1, organisation);
    const arrivedAt = hoursAgo(100);
    await placeUnit(db, unit, { state: 'onHand', site, at: arrivedAt, arrivedAt });
    await buildWatch(db, dispatcher, { kind: 'dwell', scope: { siteIds: [site.id] } });
    await evaluateWatches(context);
    const finalAt = new Date(clock.now().getTime() + 12 * HOUR);
    await placeUnit(db, unit, { state: 'left', site, at: clock.now(), arrivedAt, finalAt });
    clock.advance(HOUR);
    expect(await evaluateWatches(context)).toEqual({ raised: 0, cleared: 0 });
    clock.set(finalAt);
    expect(await evaluateWatches(context)).toEqual({ raised: 0, cleared: 1 });
    expect(await alertsNow()).toMatchObject([{ state: 'cleared', clearedBecause: 'left' }]);
  });

  test('lasts while a crossing into the next yard may still be struck', async () => {
    const { context, clock, organisation, site, other, dispatcher, hoursAgo } = await yardScene();
    const unit = await car(1, organisation);
    const arrivedAt = hoursAgo(100);
    const gone = { at: clock.now(), finalAt: new Date(clock.now().getTime() + HOUR), arrivedAt };
    await placeUnit(db, unit, { state: 'onHand', site, at: arrivedAt, arrivedAt });
    await buildWatch(db, dispatcher, { kind: 'dwell' });
    await evaluateWatches(context);
    await placeUnit(db, unit, { state: 'left', site, ...gone });
    const { LastSeen, Stay } = modelsOf(db.sequelize);
    const [left] = await Stay.findAll({ where: { unitId: unit.id }, raw: true });
    await placeUnit(db, unit, {
      ...{ state: 'onHand', site: other, at: gone.at, arrivedAt: gone.at },
      arrivalFinalAt: gone.finalAt,
    });
    if (left) await Stay.create({ ...left });
    expect(await LastSeen.findByPk(unit.id)).toMatchObject({ staySiteId: other.id });
    expect(await evaluateWatches(context)).toEqual({ raised: 0, cleared: 0 });
    clock.set(gone.finalAt);
    expect(await evaluateWatches(context)).toEqual({ raised: 0, cleared: 1 });
    expect(await alertsNow()).toMatchObject([{ clearedBecause: 'left' }]);
  });

  test('does not raise on an arrival that may still be struck, nor on a provisional departure', async () => {
    const { context, clock, organisation, site, dispatcher, hoursAgo } = await yardScene();
    const arrivedAt = hoursAgo(5);
    const finalAt = new Date(clock.now().getTime() + HOUR);
    const coming = await car(1, organisation);
    const going = await car(2, organisation);
    await placeUnit(db, coming, {
      ...{ state: 'onHand', site, at: arrivedAt, arrivedAt },
      arrivalFinalAt: finalAt,
    });
    await placeUnit(db, going, { state: 'left', site, at: hoursAgo(1), arrivedAt, finalAt });
    await buildWatch(db, dispatcher, { kind: 'dwell', hours: 4 });
    expect(await evaluateWatches(context)).toEqual({ raised: 0, cleared: 0 });
    clock.set(finalAt);
    expect(await evaluateWatches(context)).toEqual({ raised: 1, cleared: 0 });
    expect(await alertsNow()).toMatchObject([{ unitId: coming.id }]);
  });

  test('a stay elsewhere is another alert', async () => {
    const { context, clock, organisation, person, site, other, hoursAgo } = await yardScene();
    const unit = await car(1, organisation);
    const arrivedAt = hoursAgo(100);
    await placeUnit(db, unit, { state: 'onHand', site, at: arrivedAt, arrivedAt });
    await buildWatch(db, person, { kind: 'dwell' });
    await evaluateWatches(context);
    clock.advance(HOUR);
    const next = clock.now();
    await placeUnit(db, unit, { state: 'onHand', site: other, at: next, arrivedAt: next });
    clock.advance(97 * HOUR);
    expect(await evaluateWatches(context)).toEqual({ raised: 1, cleared: 1 });
    expect(await alertsNow()).toMatchObject([
      { siteId: site.id, state: 'cleared', clearedBecause: 'left' },
      { siteId: other.id, state: 'open' },
    ]);
  });

  test('drops what a longer limit no longer covers', async () => {
    const { context, organisation, site, dispatcher, hoursAgo } = await yardScene();
    const unit = await car(1, organisation);
    const arrivedAt = hoursAgo(100);
    await placeUnit(db, unit, { state: 'onHand', site, at: arrivedAt, arrivedAt });
    const watch = await buildWatch(db, dispatcher, { kind: 'dwell', hours: 96 });
    await evaluateWatches(context);
    await watch.update({ hours: 200 });
    expect(await evaluateWatches(context)).toEqual({ raised: 0, cleared: 1 });
    expect(await alertsNow()).toMatchObject([{ clearedBecause: 'changed' }]);
  });
});

describe('evaluating', () => {
  test('by two at once raises and tells once', async () => {
    const { context, organisation, person, site, hoursAgo } = await scene();
    for (let number = 1; number <= 30; number += 1) {
      const unit = await car(number, organisation);
      await placeUnit(db, unit, { state: 'enRoute', site, at: hoursAgo(100) });
    }
    await buildWatch(db, person);
    const results = await Promise.all([1, 2, 3, 4].map(() => evaluateWatches(context)));
    expect(results.reduce((sum, result) => sum + result.raised, 0)).toBe(30);
    const { Alert, OutboxMail } = modelsOf(db.sequelize);
    expect(await Alert.count()).toBe(30);
    expect(await OutboxMail.count()).toBe(1);
  });

  test('costs the same whether one car or forty are raised and cleared', async () => {
    const { context, clock, organisation, person, site } = await scene();
    await buildWatch(db, person);
    const statements = async () => {
      const spy = vi.spyOn(db.pool, 'getConnection');
      let count = 0;
      spy.mockImplementation(async () => {
        spy.mockRestore();
        const connection = await db.pool.getConnection();
        vi.spyOn(connection, 'query').mockImplementation(((...parameters: [string, unknown]) => {
          count += 1;
          return Object.getPrototypeOf(connection).query.apply(connection, parameters);
        }) as never);
        return connection;
      });
      await evaluateWatches(context);
      vi.restoreAllMocks();
      return count;
    };
    const units = [];
    const costs = [];
    for (const size of [1, 40]) {
      while (units.length < size) units.push(await car(units.length, organisation));
      for (const unit of units) {
        await placeUnit(db, unit, { state: 'enRoute', site, at: clock.now() });
      }
      clock.advance(80 * HOUR);
      costs.push(await statements());
      for (const unit of units) {
        await placeUnit(db, unit, { state: 'enRoute', site, at: clock.now() });
      }
      clock.advance(HOUR);
      costs.push(await statements());
    }
    const [raisedOne, clearedOne, raisedMany, clearedMany] = costs;
    expect(raisedOne).toBeGreaterThan(0);
    expect([raisedMany, clearedMany]).toEqual([raisedOne, clearedOne]);
    expect(await alertsNow()).toHaveLength(41);
  });

  test('tells open clients only when something changed', async () => {
    const { context, organisation, person, site, hoursAgo } = await scene();
    await placeUnit(db, await car(1, organisation), { state: 'enRoute', site, at: hoursAgo(99) });
    await buildWatch(db, person);
    await evaluateWatches(context);
    expect(context.liveEvents.since(0)).toMatchObject([{ alerts: true }]);
    await evaluateWatches(context);
    expect(context.liveEvents.last).toBe(1);
  });

  test('an ended watch clears what it raised and raises no more', async () => {
    const { context, app, organisation, person, site, hoursAgo } = await scene();
    await placeUnit(db, await car(1, organisation), { state: 'enRoute', site, at: hoursAgo(99) });
    const watch = await buildWatch(db, person);
    await evaluateWatches(context);
    const agent = await signIn(app, person);
    await agent.delete(`/api/watches/${watch.id}`).expect(204);
    expect(await evaluateWatches(context)).toEqual({ raised: 0, cleared: 0 });
    expect(await alertsNow()).toMatchObject([{ state: 'cleared', clearedBecause: 'ended' }]);
  });
});

describe('the list of alerts', () => {
  async function listScene() {
    const rest = await scene();
    const { context, clock, organisation, person, site, hoursAgo } = rest;
    const first = await car(1, organisation, { carType: 'tank car' });
    const second = await car(2, organisation);
    await placeUnit(db, first, { state: 'enRoute', site, at: hoursAgo(80) });
    await placeUnit(db, second, { state: 'enRoute', site, at: hoursAgo(70) });
    const watch = await buildWatch(db, person, { name: 'Quiet ones' });
    await evaluateWatches(context);
    const raisedAt = clock.now();
    clock.advance(5 * HOUR);
    await evaluateWatches(context);
    const agent = await signIn(rest.app, person);
    return { ...rest, first, second, watch, raisedAt, agent };
  }

  test('gives the facts, latest raised first, and how many there are', async () => {
    const { agent, watch, raisedAt } = await listScene();
    const { body } = await agent.get('/api/alerts?limit=1').expect(200);
    expect(body).toMatchObject({ count: 2, data: [{ unitId: 'QTKX2' }] });
    const rest = await agent.get(`/api/alerts?limit=1&cursor=${body.next}`).expect(200);
    const since = new Date(raisedAt.getTime() - 80 * HOUR);
    expect(rest.body).toEqual({
      count: 2,
      next: null,
      data: [
        {
          id: expect.any(Number),
          state: 'open',
          kind: 'quiet',
          watch: { id: watch.id, name: 'Quiet ones' },
          unitId: 'QTKX1',
          display: 'QTKX 1',
          unitKind: 'car',
          carType: 'tank car',
          site: { code: 'ALDER', name: 'Alder Bend Yard' },
          since: since.toISOString(),
          atLeast: false,
          hours: 72,
          overSince: new Date(since.getTime() + 72 * HOUR).toISOString(),
          raisedAt: raisedAt.toISOString(),
          acknowledged: null,
          cleared: null,
          can: { acknowledge: true },
        },
      ],
    });
  });

  test('gives every alert once over the pages, also those raised at one instant', async () => {
    const { context, app, organisation, person, site, hoursAgo } = await scene();
    for (let number = 1; number <= 5; number += 1) {
      const unit = await car(number, organisation);
      await placeUnit(db, unit, { state: 'enRoute', site, at: hoursAgo(100) });
    }
    await buildWatch(db, person);
    await evaluateWatches(context);
    const agent = await signIn(app, person);
    const seen: string[] = [];
    let cursor = '';
    do {
      const { body } = await agent.get(`/api/alerts?limit=2${cursor}`).expect(200);
      seen.push(...body.data.map((alert: { unitId: string }) => alert.unitId));
      cursor = body.next ? `&cursor=${body.next}` : '';
    } while (cursor);
    expect(seen).toEqual(['QTKX5', 'QTKX4', 'QTKX3', 'QTKX2', 'QTKX1']);
  });

  test('narrows to one watch and one car', async () => {
    const { agent, watch } = await listScene();
    const countOf = async (query: string) =>
      (await agent.get(`/api/alerts?${query}`).expect(200)).body.count as number;
    expect(await countOf(`watch=${watch.id}`)).toBe(2);
    expect(await countOf(`watch=${watch.id + 1}`)).toBe(0);
    expect(await countOf('unit=QTKX2')).toBe(1);
    expect(await countOf('unit=QTKX99')).toBe(0);
    expect(await countOf('state=cleared')).toBe(0);
  });

  test('is taken by one person, and then nobody needs to any more', async () => {
    const { agent, clock } = await listScene();
    const { body } = await agent.get('/api/alerts').expect(200);
    const [{ id }] = body.data;
    const takenAt = clock.now().toISOString();
    const taken = await agent.post(`/api/alerts/${id}/acknowledge`).expect(200);
    expect(taken.body.data).toMatchObject({
      state: 'acknowledged',
      acknowledged: { at: takenAt, by: { name: 'Ada Quill' } },
      can: { acknowledge: false },
    });
    clock.advance(HOUR);
    const again = await agent.post(`/api/alerts/${id}/acknowledge`).expect(200);
    expect(again.body.data.acknowledged.at).toBe(takenAt);
    expect((await agent.get('/api/alerts').expect(200)).body.count).toBe(1);
    expect((await agent.get('/api/alerts?state=acknowledged').expect(200)).body.count).toBe(1);
  });

  test('shows what cleared and why, and lets nobody take it any more', async () => {
    const { context, agent, clock, first, site } = await listScene();
    const readAt = clock.now();
    await placeUnit(db, first, { state: 'enRoute', site, at: readAt });
    await evaluateWatches(context);
    const { body } = await agent.get('/api/alerts?state=cleared').expect(200);
    expect(body.data).toMatchObject([
      { unitId: 'QTKX1', cleared: { because: 'read' }, can: { acknowledge: false } },
    ]);
    await agent.post(`/api/alerts/${body.data[0].id}/acknowledge`).expect(409);
  });

  test('shows strangers nothing, those told the same, administrators all', async () => {
    const { app, agent, organisation, watch } = await listScene();
    const [{ id }] = (await agent.get('/api/alerts').expect(200)).body.data;
    const stranger = await buildPerson(db, { roles: ['owner'] });
    const colleague = await buildPerson(db, { roles: ['owner'], organisation });
    const outsider = await buildPerson(db, { roles: ['owner'] });
    const { WatchPerson } = modelsOf(db.sequelize);
    for (const told of [colleague, outsider]) {
      await WatchPerson.create({ watchId: watch.id, personId: told.id });
    }
    const seen = async (person: typeof stranger) => {
      const own = await signIn(app, person);
      const { body } = await own.get('/api/alerts').expect(200);
      const { status } = await own.post(`/api/alerts/${id}/acknowledge`);
      return [body.count, status];
    };
    expect(await seen(stranger)).toEqual([0, 404]);
    // Told by the watch, but the cars are not theirs to see.
    expect(await seen(outsider)).toEqual([0, 404]);
    expect(await seen(colleague)).toEqual([2, 200]);
    expect(await seen(await buildPerson(db))).toEqual([1, 200]);
  });

  test('keeps for a dispatcher what was about their site after the car has gone', async () => {
    const { context, app, clock, organisation, site, hoursAgo } = await scene();
    const elsewhere = await buildSite(db);
    const dispatcher = await buildPerson(db, { roles: ['dispatcher'], sites: [site] });
    const unit = await car(1, organisation);
    const arrivedAt = hoursAgo(100);
    await placeUnit(db, unit, { state: 'onHand', site, at: arrivedAt, arrivedAt });
    await buildWatch(db, dispatcher, { kind: 'dwell' });
    await evaluateWatches(context);
    const at = clock.now();
    await placeUnit(db, unit, { state: 'onHand', site: elsewhere, at, arrivedAt: at });
    await evaluateWatches(context);
    const agent = await signIn(app, dispatcher);
    const { body } = await agent.get('/api/alerts?state=cleared').expect(200);
    expect(body.data).toMatchObject([{ site: { code: 'ALDER' }, cleared: { because: 'left' } }]);
  });

  test('refuses what it does not know, and those not signed in', async () => {
    const { app, agent } = await listScene();
    const { body } = await agent.get('/api/alerts?state=snoozed&limit=0&sort=x').expect(400);
    const pointers = body.errors.map((fault: { pointer: string }) => fault.pointer);
    expect(pointers.sort()).toEqual(['?limit', '?sort', '?state']);
    await request(app).get('/api/alerts').expect(401);
    await request(app).post('/api/alerts/1/acknowledge').expect(401);
    await agent.post('/api/alerts/none/acknowledge').expect(404);
  });
});
