import request from 'supertest';
import { describe, expect, test } from 'vitest';
import { createApp } from '../../server/app.js';
import { fleetSummaryAnswer } from '../../server/contract/fleet.js';
import { aarIdentity } from '../../server/domain/identifiers/identity.js';
import { buildContext } from '../support/context.js';
import { countStatements } from '../support/count-statements.js';
import { useTestDatabase } from '../support/database.js';
import {
  buildOrganisation,
  buildPerson,
  buildSite,
  buildUnit,
  signIn,
} from '../support/factories.js';
import { hours, placeUnit } from '../support/histories.js';

const db = useTestDatabase();
const NOW = new Date('2026-03-10T12:00:00.000Z');
const ago = (count: number) => new Date(NOW.getTime() - hours(count));

async function openPortal(values: Parameters<typeof buildPerson>[1] = {}, lagMs = 0) {
  const counted = countStatements(buildContext(db));
  counted.context.clock.set(NOW);
  const app = createApp(counted.context, { projectorLagMs: () => Promise.resolve(lagMs) });
  return { agent: await signIn(app, await buildPerson(db, values)), ...counted };
}

/** Of one owner: two past their limits at two sites, one within, one moving, one quiet, one unseen. */
async function buildFleet() {
  const owner = await buildOrganisation(db);
  const short = await buildSite(db, { code: 'SHORT', name: 'Quern Mills', dwellLimitHours: 10 });
  const long = await buildSite(db, { code: 'LONG', name: 'Alder Bend Yard', dwellLimitHours: 100 });
  const add = async (number: number, values: Parameters<typeof placeUnit>[2]) =>
    placeUnit(db, await buildUnit(db, { identity: aarIdentity('QTKX', number), owner }), values);
  await add(1, { state: 'onHand', at: ago(90), arrivedAt: ago(90), site: short });
  await add(2, { state: 'onHand', at: ago(20), stayFirstSeenAt: ago(120.5), site: long });
  await add(3, { state: 'onHand', at: ago(5), arrivedAt: ago(5), site: long });
  await add(4, { at: ago(4), site: long });
  await add(5, { at: ago(80), site: short });
  await add(6, {});
  return { owner, short, long };
}

describe('the summary', () => {
  test('counts what the opening sentence says, and names the one that has stood longest', async () => {
    const { owner } = await buildFleet();
    const { agent } = await openPortal({ roles: ['owner'], organisation: owner }, 1_234);
    const { body } = await agent.get('/api/fleet/summary').expect(200);
    expect(fleetSummaryAnswer.parse(body)).toEqual(body);
    expect(body.data).toEqual({
      total: 6,
      onHand: 3,
      enRoute: 2,
      unseen: 1,
      quiet: 1,
      pastLimit: 2,
      readLast24h: 3,
      holds: { cars: true, boxes: false },
      oldestPastLimit: {
        unitId: 'QTKX2',
        display: 'QTKX 2',
        hours: 120,
        site: { code: 'LONG', name: 'Alder Bend Yard' },
      },
      asOf: NOW.toISOString(),
      projectorLagMs: 1_234,
    });
  });

  test('counts a car once for a person who sees it in two ways', async () => {
    const { owner, long, short } = await buildFleet();
    const sites = [long, short];
    const values = { roles: ['owner' as const, 'dispatcher' as const], organisation: owner, sites };
    const { agent } = await openPortal(values);
    const { body } = await agent.get('/api/fleet/summary').expect(200);
    expect(body.data).toMatchObject({ total: 6, onHand: 3, quiet: 1, pastLimit: 2 });
  });

  test('does not call strangers quiet', async () => {
    const { short } = await buildFleet();
    await placeUnit(db, await buildUnit(db, { registered: false }), { at: ago(80), site: short });
    const { agent } = await openPortal();
    const { body } = await agent.get('/api/fleet/summary').expect(200);
    expect(body.data).toMatchObject({ total: 7, enRoute: 3, quiet: 1 });
  });

  test('of nothing is zeros', async () => {
    const { agent } = await openPortal({ roles: ['clerk'] });
    const { body } = await agent.get('/api/fleet/summary').expect(200);
    expect(body.data).toMatchObject({ total: 0, quiet: 0, pastLimit: 0, oldestPastLimit: null });
  });

  test('agrees with the lists that its numbers open', async () => {
    const { owner } = await buildFleet();
    const { agent } = await openPortal({ roles: ['owner'], organisation: owner });
    const { body } = await agent.get('/api/fleet/summary').expect(200);
    const { onHand, enRoute, unseen, quiet, pastLimit } = body.data;
    const counts = { 'state=onHand': onHand, 'state=enRoute': enRoute, 'state=unseen': unseen };
    const overlays = { 'quiet=true': quiet, 'pastLimit=true': pastLimit };
    for (const [query, count] of Object.entries({ ...counts, ...overlays })) {
      const list = await agent.get(`/api/equipment?${query}`).expect(200);
      expect(list.body.data, query).toHaveLength(count as number);
    }
  });

  test('costs the same number of statements however many cars there are', async () => {
    const { owner } = await buildFleet();
    const { agent, statements } = await openPortal({ roles: ['owner'], organisation: owner });
    statements.take();
    await agent.get('/api/fleet/summary').expect(200);
    const few = statements.take().length;
    for (let count = 0; count < 30; count += 1) {
      await placeUnit(db, await buildUnit(db, { owner }), { at: ago(80) });
    }
    statements.take();
    await agent.get('/api/fleet/summary').expect(200);
    expect(statements.take()).toHaveLength(few);
  });

  test('refuses whoever is not signed in, and parameters that it does not know', async () => {
    const { agent } = await openPortal();
    await request(createApp(buildContext(db)))
      .get('/api/fleet/summary')
      .expect(401);
    const { body } = await agent.get('/api/fleet/summary?site=ALDER').expect(400);
    expect(body.errors).toEqual([{ pointer: '?site', detail: expect.any(String) }]);
  });
});
