import { beforeEach, describe, expect, test } from 'vitest';
import { createApp } from '../../server/app.js';
import { doubtsAnswer, unitDoubtsAnswer } from '../../server/contract/doubts.js';
import { aarIdentity } from '../../server/domain/identifiers/identity.js';
import { ingestReads } from '../../server/ingest/ingest-reads.js';
import { modelsOf } from '../../server/models/index.js';
import type { Organisation } from '../../server/models/organisation.js';
import type { ReadPoint } from '../../server/models/read-point.js';
import type { Site } from '../../server/models/site.js';
import type { Unit } from '../../server/models/unit.js';
import { createProjector } from '../../server/projections/projector.js';
import { buildContext } from '../support/context.js';
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
import { countStatements } from '../support/count-statements.js';
import { placeUnit } from '../support/places.js';

const db = useTestDatabase();
const NOW = new Date('2026-03-10T12:00:00.000Z');
const UNIT = '/api/equipment/QTKX1/doubts';
const hoursAgo = (hours: number) => new Date(NOW.getTime() - hours * 3_600_000);

let alder: Site;
let cairn: Site;
let northLead: ReadPoint;
let eastLead: ReadPoint;
let unit: Unit;
let owner: Organisation;

beforeEach(async () => {
  alder = await buildSite(db, { code: 'ALDER', name: 'Alder Bend Yard' });
  cairn = await buildSite(db, { code: 'CAIRN', name: 'Cairn Junction' });
  northLead = await buildReadPoint(db, { site: alder, code: 'N1', name: 'North lead' });
  eastLead = await buildReadPoint(db, { site: cairn, code: 'E1', name: 'East lead' });
  owner = await buildOrganisation(db, { code: 'QTK' });
  unit = await buildUnit(db, { identity: aarIdentity('QTKX', 1), owner });
  await placeUnit(db, unit, { state: 'enRoute', site: cairn, at: hoursAgo(3) });
});

async function agentOf(values: Parameters<typeof buildPerson>[1] = {}) {
  const counted = countStatements(buildContext(db));
  counted.context.clock.set(NOW);
  const app = createApp(counted.context, { clientDirectory: null });
  return { agent: await signIn(app, await buildPerson(db, values)), ...counted };
}

/** The row that the projector writes: seen at Cairn, and soon after at Alder. */
async function doubt(
  { id }: Unit,
  values: { at?: Date; by?: 'mates' | 'point' | 'side'; to?: ReadPoint } = {},
): Promise<void> {
  const { at = hoursAgo(2), by = null, to = northLead } = values;
  await db.pool.query(
    `INSERT INTO doubts (unit_id, at, read_point_id, previous_read_point_id, previous_at,
       rail_metres, corroborated_by) VALUES (?, ?, ?, ?, ?, ?, ?)`,
    [id, at, to.id, eastLead.id, new Date(at.getTime() - 1_800_000), 212_000, by],
  );
}

const inDoubt = {
  unitId: 'QTKX1',
  display: 'QTKX 1',
  at: hoursAgo(2).toISOString(),
  site: { code: 'ALDER', name: 'Alder Bend Yard' },
  readPoint: { code: 'N1', name: 'North lead' },
  previous: {
    at: hoursAgo(2.5).toISOString(),
    site: { code: 'CAIRN', name: 'Cairn Junction' },
    readPoint: { code: 'E1', name: 'East lead' },
    railMetres: 212_000,
  },
  corroboratedBy: null,
  kind: 'tag',
};

/** Other cars in doubt at Alder, an hour apart from each other. */
async function crowd(count: number): Promise<void> {
  for (let n = 0; n < count; n += 1) {
    await doubt(await buildUnit(db, { identity: aarIdentity('QBLX', n) }), { at: hoursAgo(4 + n) });
  }
}

describe('doubts of one car', () => {
  test('tell both sightings, and what speaks for the later one', async () => {
    await doubt(unit);
    await doubt(unit, { at: hoursAgo(1), by: 'mates' });
    const { agent } = await agentOf();
    const { body } = await agent.get(UNIT).expect(200);
    expect(unitDoubtsAnswer.parse(body)).toEqual(body);
    expect(body.next).toBeNull();
    expect(body.data).toEqual([
      expect.objectContaining({ at: hoursAgo(1).toISOString(), corroboratedBy: 'mates' }),
      inDoubt,
    ]);
  });

  test("are a matter of the site's clock where four others are in doubt within a day", async () => {
    await doubt(unit);
    await crowd(3);
    const { agent } = await agentOf();
    const kinds = async () =>
      (await agent.get(UNIT).expect(200)).body.data.map((row: { kind: string }) => row.kind);
    expect(await kinds()).toEqual(['tag']);
    await doubt(await buildUnit(db), { at: hoursAgo(25) });
    expect(await kinds()).toEqual(['clock']);
  });

  test('are told page by page, each once', async () => {
    for (const hours of [1, 2, 3]) await doubt(unit, { at: hoursAgo(hours) });
    const { agent } = await agentOf();
    const first = await agent.get(`${UNIT}?limit=2`).expect(200);
    const rest = await agent.get(`${UNIT}?limit=2&cursor=${first.body.next}`).expect(200);
    const told = [...first.body.data, ...rest.body.data].map((row: { at: string }) => row.at);
    expect(told).toEqual([1, 2, 3].map((hours) => hoursAgo(hours).toISOString()));
    expect(rest.body.next).toBeNull();
    await agent.get(`${UNIT}?limit=0`).expect(400);
    await agent.get(`${UNIT}?cursor=nonsense`).expect(400);
  });

  test('belong to its owner, and to a clerk as far as they lie at their sites', async () => {
    await doubt(unit);
    const mine = await agentOf({ roles: ['owner'], organisation: owner });
    expect((await mine.agent.get(UNIT).expect(200)).body.data).toEqual([inDoubt]);
    await placeUnit(db, unit, { state: 'enRoute', site: alder, at: hoursAgo(2) });
    const clerk = await agentOf({ roles: ['clerk'], sites: [alder] });
    expect((await clerk.agent.get(UNIT).expect(200)).body.data).toEqual([
      { ...inDoubt, previous: null },
    ]);
    await placeUnit(db, unit, { state: 'enRoute', site: cairn, at: hoursAgo(3) });
    const elsewhere = await agentOf({ roles: ['clerk'], sites: [cairn] });
    expect((await elsewhere.agent.get(UNIT).expect(200)).body.data).toEqual([]);
    const stranger = await agentOf({ roles: ['owner'] });
    await stranger.agent.get(UNIT).expect(404);
  });
});

describe('what the projector leaves', () => {
  async function read(site: Site, numbers: number[], at: Date): Promise<void> {
    const reads = numbers.map((number) => ({ antenna: 1, tag: `QTKX ${number}`, readAt: at }));
    await ingestReads(db, { site, reads: JSON.parse(JSON.stringify(reads)), receivedAt: NOW });
    const context = buildContext(db);
    context.clock.set(NOW);
    const projector = createProjector(context);
    await projector.drain();
    await projector.stop();
  }

  beforeEach(async () => {
    await buildAntenna(db, { readPoint: northLead, number: 1 });
    await buildAntenna(db, { readPoint: eastLead, number: 1 });
    const { RouteEdge, RouteNode } = modelsOf(db.sequelize);
    const nodes = [alder, cairn].map(({ id, code, name }) =>
      RouteNode.create({ code, name, siteId: id, latitude: 45, longitude: -93 }),
    );
    const [toNodeId = 0, fromNodeId = 0] = (await Promise.all(nodes)).map((node) => node.id);
    const edge = { fromNodeId, toNodeId, railMetres: 120_000, kind: 'rail', line: 'Main' };
    await RouteEdge.create(edge);
    await db.pool.query('UPDATE config_state SET version = version + 1 WHERE id = 1');
  });

  test('of a car read 120 km away ten minutes later: it has not moved, and both are kept', async () => {
    await read(cairn, [1], hoursAgo(3));
    await read(alder, [1], hoursAgo(3 - 1 / 6));
    const { agent } = await agentOf();
    const { body } = await agent.get(UNIT).expect(200);
    expect(body.data).toEqual([
      {
        ...inDoubt,
        at: hoursAgo(3 - 1 / 6).toISOString(),
        previous: { ...inDoubt.previous, at: hoursAgo(3).toISOString(), railMetres: 120_000 },
      },
    ]);
    const shown = await agent.get('/api/equipment/QTKX1').expect(200);
    expect(shown.body.data.lastSeen).toMatchObject({
      at: hoursAgo(3).toISOString(),
      readPoint: { code: 'E1' },
    });
    const sightings = await agent.get('/api/equipment/QTKX1/sightings').expect(200);
    expect(sightings.body.data).toMatchObject([
      { readPoint: { code: 'N1' }, doubted: true },
      { readPoint: { code: 'E1' }, doubted: false },
    ]);
  });

  test('of five cars at one site within a day is a matter of its clock', async () => {
    for (const number of [1, 2, 3, 4, 5]) {
      await read(cairn, [number], hoursAgo(10 - number));
      await read(alder, [number], hoursAgo(10 - number - 0.1));
    }
    const { agent } = await agentOf();
    const { body } = await agent.get('/api/doubts').expect(200);
    expect(body.counts).toEqual({
      doubts: 5,
      units: 5,
      clocks: [{ code: 'ALDER', name: 'Alder Bend Yard', units: 5 }],
    });
  });
});

describe('all doubts', () => {
  test('are those of 30 days that nothing has settled, with whose clock may be wrong', async () => {
    await doubt(unit);
    await doubt(unit, { at: hoursAgo(1), by: 'side' });
    await doubt(unit, { at: hoursAgo(31 * 24) });
    await crowd(5);
    const { agent } = await agentOf();
    const { body } = await agent.get('/api/doubts').expect(200);
    expect(doubtsAnswer.parse(body)).toEqual(body);
    expect(body.counts).toEqual({
      doubts: 6,
      units: 6,
      clocks: [{ code: 'ALDER', name: 'Alder Bend Yard', units: 6 }],
    });
    expect(body.data).toHaveLength(6);
    expect(body.data[0]).toEqual({ ...inDoubt, kind: 'clock' });
  });

  test('are for administrators, and cost as many statements whatever their number', async () => {
    const { agent, statements } = await agentOf();
    const costOf = async () => {
      statements.take();
      await agent.get('/api/doubts').expect(200);
      return statements.take().length;
    };
    await doubt(unit);
    const one = await costOf();
    await crowd(4);
    await doubt(unit, { at: hoursAgo(50) });
    // One more: the names of the sites whose clock may be wrong.
    expect(await costOf()).toBe(one + 1);
    for (const role of ['owner', 'clerk', 'dispatcher'] as const) {
      await (await agentOf({ roles: [role] })).agent.get('/api/doubts').expect(403);
    }
  });
});
