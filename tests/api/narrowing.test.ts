import type { Express } from 'express';
import { beforeEach, describe, expect, test } from 'vitest';
import { createApp } from '../../server/app.js';
import { aarIdentity } from '../../server/domain/identifiers/identity.js';
import type { Organisation } from '../../server/models/organisation.js';
import type { ReadPoint } from '../../server/models/read-point.js';
import type { Site } from '../../server/models/site.js';
import type { Unit } from '../../server/models/unit.js';
import { buildContext } from '../support/context.js';
import { useTestDatabase } from '../support/database.js';
import {
  buildOrganisation,
  buildPerson,
  buildReadPoint,
  buildSite,
  buildUnit,
  signIn,
} from '../support/factories.js';
import { buildLeg, buildPassage, buildStay, hours, placeUnit } from '../support/histories.js';

const db = useTestDatabase();
const NOW = new Date('2026-03-10T12:00:00.000Z');
const ago = (count: number) => new Date(NOW.getTime() - hours(count));

let app: Express;
let [alder, cairn, wickett]: Site[] = [];
let [mine, theirs]: Organisation[] = [];
let [northLead, gate]: ReadPoint[] = [];
const units = new Map<string, Unit>();

async function add(name: string, values: Parameters<typeof placeUnit>[2], owner?: Organisation) {
  const identity = aarIdentity('QTKX', units.size + 1);
  const registered = owner !== undefined;
  const unit = await buildUnit(db, { identity, owner: owner ?? null, registered });
  await placeUnit(db, unit, values);
  units.set(name, unit);
  return unit;
}

beforeEach(async () => {
  units.clear();
  const context = buildContext(db);
  context.clock.set(NOW);
  app = createApp(context);
  alder = await buildSite(db, { code: 'ALDER' });
  cairn = await buildSite(db, { code: 'CAIRN' });
  wickett = await buildSite(db, { code: 'WICKETT', kind: 'line' });
  [mine, theirs] = [await buildOrganisation(db), await buildOrganisation(db)];
  northLead = await buildReadPoint(db, { site: alder, code: 'N1' });
  gate = await buildReadPoint(db, {
    site: cairn,
    code: 'GATE',
    decreasingSite: alder,
    increasingSite: cairn,
  });
  await add('mine at Alder', { state: 'onHand', at: ago(10), site: alder }, mine);
  await add('mine at Cairn', { state: 'onHand', at: ago(10), site: cairn }, mine);
  await add('mine unseen', {}, mine);
  await add('theirs at Alder', { state: 'onHand', at: ago(9), site: alder }, theirs);
  await add('theirs gone from Alder', { at: ago(8), site: alder }, theirs);
  await add('stranger at Alder', { state: 'onHand', at: ago(7), site: alder });
  await add('stranger past Wickett', { at: ago(6), site: wickett });
});

async function enter(values: Parameters<typeof buildPerson>[1]) {
  return signIn(app, await buildPerson(db, values));
}
type Agent = Awaited<ReturnType<typeof enter>>;

/** Which of the units the person gets at an address made from each. */
async function openedBy(agent: Agent, below = ''): Promise<string[]> {
  const opened: string[] = [];
  for (const [name, unit] of units) {
    const { status } = await agent.get(`/api/equipment/${unit.unitKey}${below}`);
    expect([200, 404]).toContain(status);
    if (status === 200) opened.push(name);
  }
  return opened;
}

async function listedBy(agent: Agent): Promise<string[]> {
  const { body } = await agent.get('/api/equipment?limit=200').expect(200);
  const shown = body.data.map((row: { unitId: string }) => row.unitId);
  return [...units].filter(([, unit]) => shown.includes(unit.unitKey)).map(([name]) => name);
}

const everything = [
  'mine at Alder',
  'mine at Cairn',
  'mine unseen',
  'theirs at Alder',
  'theirs gone from Alder',
  'stranger at Alder',
  'stranger past Wickett',
];
const atAlder = ['mine at Alder', 'theirs at Alder', 'theirs gone from Alder', 'stranger at Alder'];

describe.each([
  ['an owner', () => ({ roles: ['owner' as const], organisation: mine }), everything.slice(0, 3)],
  ['a clerk', () => ({ roles: ['clerk' as const], sites: [alder as Site] }), atAlder],
  ['a dispatcher', () => ({ roles: ['dispatcher' as const], sites: [alder as Site] }), atAlder],
  [
    'a dispatcher of a line point',
    () => ({ roles: ['dispatcher' as const], sites: [wickett as Site] }),
    ['stranger past Wickett'],
  ],
  [
    'an owner who is also a clerk',
    () => ({
      roles: ['owner' as const, 'clerk' as const],
      organisation: mine,
      sites: [alder as Site],
    }),
    everything.slice(0, 6),
  ],
  ['an administrator', () => ({ roles: ['administrator' as const] }), everything],
  [
    'an owner without an organisation',
    () => ({ roles: ['owner' as const], organisation: null }),
    [],
  ],
  ['a clerk without a site', () => ({ roles: ['clerk' as const] }), []],
  [
    'somebody of the organisation and at the site who is neither owner nor clerk',
    () => ({ roles: [], organisation: mine, sites: [alder as Site] }),
    [],
  ],
] as const)('%s', (_who, valuesOf, expected) => {
  const values = () => ({ ...valuesOf(), roles: [...valuesOf().roles] });

  test('lists, opens, counts and finds by number exactly these', async () => {
    const agent = await enter(values());
    expect(await listedBy(agent)).toEqual(expected);
    expect(await openedBy(agent)).toEqual(expected);
    expect(await openedBy(agent, '/movements')).toEqual(expected);
    const summary = await agent.get('/api/fleet/summary').expect(200);
    expect(summary.body.data.total).toBe(expected.length);
    for (const [name, unit] of units) {
      const { body } = await agent.get('/api/look-up').query({ q: unit.unitKey }).expect(200);
      const hits = body.data.hits.map((hit: { id: string }) => hit.id);
      expect(hits, name).toEqual(
        (expected as readonly string[]).includes(name) ? [unit.unitKey] : [],
      );
    }
  });

  test('gets no more of them by any filter', async () => {
    const agent = await enter(values());
    const filters = [
      'search=QTKX',
      'site=ALDER',
      'site=CAIRN',
      'state=onHand',
      `owner=${theirs?.code}`,
    ];
    for (const filter of filters) {
      for (const sort of ['attention', 'lastSeen', '-lastSeen', 'dwell', 'unit']) {
        const { body } = await agent.get(`/api/equipment?${filter}&sort=${sort}`).expect(200);
        const shown = body.data.map((row: { unitId: string }) => row.unitId);
        const names = [...units].filter(([, unit]) => shown.includes(unit.unitKey));
        expect(expected).toEqual(expect.arrayContaining(names.map(([name]) => name)));
      }
    }
  });
});

describe('a unit that was once at the site of a clerk', () => {
  let unit: Unit;

  beforeEach(async () => {
    unit = await add('long gone', { state: 'onHand', at: ago(5), site: cairn }, theirs);
    const stays = [
      { site: alder as Site, firstSeenAt: ago(300), departedAt: ago(200) },
      { site: cairn as Site, firstSeenAt: ago(190), departedAt: ago(100) },
      { site: alder as Site, firstSeenAt: ago(90), departedAt: ago(50) },
      { site: cairn as Site, firstSeenAt: ago(5) },
    ] as const;
    for (const stay of stays) await buildStay(db, unit, stay);
    for (const [index, from] of stays.slice(0, 3).entries()) {
      const to = stays[index + 1];
      if (!to) continue;
      const departedAt = new Date(to.firstSeenAt.getTime() - hours(5));
      const ends = { departedAt, arrivedAt: to.firstSeenAt };
      await buildLeg(db, unit, { from, to, ...ends, railMetres: 1_000 });
    }
    await buildPassage(db, unit, {
      readPoint: northLead as ReadPoint,
      at: ago(50),
      direction: 'decreasing',
    });
  });

  test('opens, but shows only what happened there, and where it went is not said', async () => {
    const agent = await enter({ roles: ['clerk'], sites: [alder as Site] });
    const { body } = await agent.get(`/api/equipment/${unit.unitKey}`).expect(200);
    expect(body.data).toMatchObject({
      state: 'enRoute',
      quiet: false,
      quietAt: null,
      pastLimit: false,
      stay: null,
      sitesOnly: true,
      lastSeen: {
        site: { code: 'ALDER' },
        readPoint: { code: 'N1' },
        at: ago(50).toISOString(),
        direction: 'decreasing',
        passId: `ALDER-N1-${ago(50).getTime().toString(36)}`,
      },
    });
    expect(body.can).toEqual({ watch: false });
    const movements = await agent.get(`/api/equipment/${unit.unitKey}/movements`).expect(200);
    expect(movements.body.data).toMatchObject({
      stays: [{ arrivedAt: ago(300).toISOString() }, { arrivedAt: ago(90).toISOString() }],
      legs: [],
      railMetres: 0,
    });
    expect(JSON.stringify([body, movements.body])).not.toContain('CAIRN');
  });

  test('is not in their list, but is found by its whole number', async () => {
    const agent = await enter({ roles: ['clerk'], sites: [alder as Site] });
    expect(await listedBy(agent)).toEqual(atAlder);
    const { body } = await agent.get('/api/look-up').query({ q: unit.unitKey }).expect(200);
    expect(body.data.hits).toMatchObject([{ id: unit.unitKey }]);
  });

  test('shows its legs to who works at both ends, and all to its owner', async () => {
    const both = await enter({ roles: ['clerk'], sites: [alder as Site, cairn as Site] });
    const whole = await enter({ roles: ['owner'], organisation: theirs });
    for (const agent of [both, whole]) {
      const { body } = await agent.get(`/api/equipment/${unit.unitKey}/movements`).expect(200);
      expect(body.data.stays).toHaveLength(4);
      expect(body.data.railMetres).toBe(3_000);
    }
    const { body } = await whole.get(`/api/equipment/${unit.unitKey}`).expect(200);
    expect(body.data).toMatchObject({ state: 'onHand', sitesOnly: false });
    expect(body.can).toEqual({ watch: true });
  });

  test('does not exist for a clerk elsewhere', async () => {
    const agent = await enter({ roles: ['clerk'], sites: [wickett as Site] });
    await agent.get(`/api/equipment/${unit.unitKey}`).expect(404);
  });
});

test('a reader between two sites shows its sightings to the people of both', async () => {
  const unit = await add('through the gate', { state: 'onHand', at: ago(1), site: cairn }, theirs);
  await buildPassage(db, unit, {
    readPoint: gate as ReadPoint,
    at: ago(1),
    direction: 'increasing',
  });
  for (const site of [alder, cairn] as Site[]) {
    const agent = await enter({ roles: ['clerk'], sites: [site] });
    const { body } = await agent.get(`/api/equipment/${unit.unitKey}/sightings`).expect(200);
    expect(body.data).toMatchObject([{ readPoint: { code: 'GATE' } }]);
  }
  const agent = await enter({ roles: ['clerk'], sites: [wickett as Site] });
  await agent.get(`/api/equipment/${unit.unitKey}/sightings`).expect(404);
});
