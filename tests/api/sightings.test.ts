import { beforeEach, describe, expect, test } from 'vitest';
import { createApp } from '../../server/app.js';
import { readsAnswer, sightingsAnswer } from '../../server/contract/movements.js';
import { encodeAei } from '../../server/domain/identifiers/aei.js';
import { aarIdentity } from '../../server/domain/identifiers/identity.js';
import { ingestReads } from '../../server/ingest/ingest-reads.js';
import type { ReadPoint } from '../../server/models/read-point.js';
import type { Site } from '../../server/models/site.js';
import { createProjector } from '../../server/projections/projector.js';
import { buildContext } from '../support/context.js';
import { countStatements } from '../support/count-statements.js';
import { useTestDatabase } from '../support/database.js';
import {
  buildAntenna,
  buildPerson,
  buildReadPoint,
  buildSite,
  buildUnit,
  signIn,
} from '../support/factories.js';

const db = useTestDatabase();
const START = new Date('2026-03-10T06:00:00.000Z');
const NOW = new Date('2026-03-10T12:00:00.000Z');
const UNIT = '/api/equipment/QTKX40127';
const at = (seconds: number) => new Date(START.getTime() + seconds * 1_000).toISOString();
const tagOf = (number: number, side: 'left' | 'right') =>
  encodeAei({ groupCode: 19, initial: 'QTKX', number, side, lengthDm: 170 });
const [LEFT, RIGHT] = [tagOf(40127, 'left'), tagOf(40127, 'right')];

let alder: Site;
let northLead: ReadPoint;

beforeEach(async () => {
  alder = await buildSite(db, { code: 'ALDER', name: 'Alder Bend Yard' });
  northLead = await buildReadPoint(db, { site: alder, code: 'N1', name: 'North lead', track: 'N' });
  await buildAntenna(db, { readPoint: northLead, number: 1, offsetM: -3, side: 'left' });
  await buildAntenna(db, { readPoint: northLead, number: 2, offsetM: -3, side: 'right' });
  await buildAntenna(db, { readPoint: northLead, number: 3, offsetM: 3, side: 'left' });
  const tags = [
    { value: LEFT, side: 'left' as const },
    { value: RIGHT, side: 'right' as const },
  ];
  await buildUnit(db, { identity: aarIdentity('QTKX', 40127), tags });
});

async function openPortal(values: Parameters<typeof buildPerson>[1] = {}) {
  const counted = countStatements(buildContext(db));
  counted.context.clock.set(NOW);
  const agent = await signIn(createApp(counted.context), await buildPerson(db, values));
  return { agent, ...counted };
}

/** Sends reads by the door and folds them. */
async function read(site: Site, reads: object[]): Promise<void> {
  const answer = await ingestReads(db, { site, reads, receivedAt: NOW });
  expect(answer).toMatchObject({ held: 0, rejected: 0 });
  const context = buildContext(db);
  context.clock.set(NOW);
  const projector = createProjector(context);
  await projector.drain();
  await projector.stop();
}

/** Inward over the lead: first at offset -3 on both sides, then at +3 on the left. */
const inward = (second: number) => [
  { antenna: 1, tag: LEFT, readAt: at(second), rssi: -48.5, count: 3 },
  { antenna: 1, tag: LEFT, readAt: at(second + 0.2) },
  { antenna: 2, tag: RIGHT, readAt: at(second + 0.4) },
  { antenna: 3, tag: LEFT, readAt: at(second + 1) },
];

describe('sightings', () => {
  test('say where, when, which way, and which antennas and tag sides answered', async () => {
    await read(alder, inward(0));
    const { agent } = await openPortal();
    const { body } = await agent.get(`${UNIT}/sightings`).expect(200);
    expect(sightingsAnswer.parse(body)).toEqual(body);
    expect(body).toEqual({
      data: [
        {
          passId: `ALDER-N1-${START.getTime().toString(36)}`,
          site: { code: 'ALDER', name: 'Alder Bend Yard' },
          readPoint: { code: 'N1', name: 'North lead' },
          track: 'N',
          startedAt: at(0),
          endedAt: at(1),
          direction: 'increasing',
          directionBasis: 'antennas',
          basis: 'read',
          role: 'crossing',
          stray: null,
          doubted: false,
          speedKmh: expect.any(Number),
          antennas: [
            { number: 1, side: 'left', reads: 2 },
            { number: 2, side: 'right', reads: 1 },
            { number: 3, side: 'left', reads: 1 },
          ],
          sides: ['left', 'right'],
          passages: 1,
          reads: 4,
        },
      ],
      next: null,
    });
  });

  test('come latest first, each once over the pages, and within a span', async () => {
    for (const hour of [0, 1, 2, 3]) await read(alder, inward(hour * 3_600));
    const { agent } = await openPortal();
    const started: string[] = [];
    let cursor = '';
    do {
      const page: string = cursor ? `&cursor=${cursor}` : '';
      const { body } = await agent.get(`${UNIT}/sightings?limit=3${page}`).expect(200);
      started.push(...body.data.map((row: { startedAt: string }) => row.startedAt));
      cursor = body.next ?? '';
    } while (cursor);
    expect(started).toEqual([at(10_800), at(7_200), at(3_600), at(0)]);
    const span = { from: at(3_000), to: at(7_200) };
    const { body } = await agent.get(`${UNIT}/sightings`).query(span).expect(200);
    expect(body.data).toMatchObject([{ startedAt: at(3_600) }]);
  });
});

describe('a car beside the track', () => {
  /** One tag at one antenna, every ten minutes. */
  const beside = [0, 1, 2, 3].map((n) => ({ antenna: 1, tag: LEFT, readAt: at(3_600 + n * 600) }));

  test('is shown once a day, in no pass, and moves nothing', async () => {
    await read(alder, [...inward(0), ...beside]);
    const { agent } = await openPortal();
    const { body } = await agent.get(`${UNIT}/sightings`).expect(200);
    expect(sightingsAnswer.parse(body)).toEqual(body);
    expect(body.data).toMatchObject([
      {
        passId: null,
        role: 'stray',
        stray: 'beside',
        startedAt: at(3_600),
        endedAt: at(5_400),
        direction: 'unknown',
        passages: 4,
        reads: 4,
      },
      { role: 'crossing', stray: null, startedAt: at(0) },
    ]);
    const reads = await agent.get(`${UNIT}/reads`).expect(200);
    expect(readsAnswer.parse(reads.body)).toEqual(reads.body);
    const passIds = reads.body.data.map((row: { passId: string | null }) => row.passId);
    expect(passIds.slice(0, 4)).toEqual([null, null, null, null]);
    expect(passIds[4]).toMatch(/^ALDER-N1-/);
    const unit = await agent.get(UNIT).expect(200);
    expect(unit.body.data.lastSeen.at).toBe(at(1));
  });

  test('keeps its place on the pages', async () => {
    const nextDay = beside.map((one) => ({
      ...one,
      readAt: new Date(Date.parse(one.readAt) - 86_400_000).toISOString(),
    }));
    await read(alder, [...inward(0), ...beside, ...nextDay]);
    const { agent } = await openPortal();
    const started: string[] = [];
    let cursor = '';
    do {
      const page: string = cursor ? `&cursor=${cursor}` : '';
      const { body } = await agent.get(`${UNIT}/sightings?limit=1${page}`).expect(200);
      started.push(...body.data.map((row: { startedAt: string }) => row.startedAt));
      cursor = body.next ?? '';
    } while (cursor);
    expect(started).toEqual([at(3_600), at(0), at(3_600 - 86_400)]);
  });
});

describe('raw reads', () => {
  test('come as the reader gave them, latest first', async () => {
    await read(alder, inward(0));
    const { agent } = await openPortal();
    const { body } = await agent.get(`${UNIT}/reads`).expect(200);
    expect(readsAnswer.parse(body)).toEqual(body);
    expect(body.next).toBeNull();
    expect(body.data).toHaveLength(4);
    expect(body.data[0]).toMatchObject({
      antenna: 3,
      tag: LEFT,
      readAt: at(1),
      antennaSide: 'left',
    });
    expect(body.data[1]).toMatchObject({ antenna: 2, tag: RIGHT, tagSide: 'right' });
    expect(body.data[3]).toEqual({
      tag: LEFT,
      tagSide: 'left',
      site: { code: 'ALDER', name: 'Alder Bend Yard' },
      readPoint: { code: 'N1', name: 'North lead' },
      antenna: 1,
      antennaSide: 'left',
      readAt: at(0),
      rssi: -48.5,
      count: 3,
      receivedAt: NOW.toISOString(),
      passId: `ALDER-N1-${START.getTime().toString(36)}`,
    });
  });

  test('are neither those of the next car nor a second time the same', async () => {
    const next = { antenna: 1, tag: tagOf(7, 'left'), readAt: at(0.3) };
    await read(alder, [...inward(0), next, ...inward(0)]);
    const { agent } = await openPortal();
    const { body } = await agent.get(`${UNIT}/reads`).expect(200);
    expect(body.data.map((row: { tag: string }) => row.tag)).not.toContain(tagOf(7, 'left'));
    expect(body.data).toHaveLength(4);
  });

  test('come each once over the pages, across passages and inside one', async () => {
    for (const hour of [0, 1, 2]) await read(alder, inward(hour * 3_600));
    const { agent } = await openPortal();
    for (const limit of [1, 3, 5, 12]) {
      const readAts: string[] = [];
      let cursor = '';
      do {
        const page: string = cursor ? `&cursor=${cursor}` : '';
        const { body } = await agent.get(`${UNIT}/reads?limit=${limit}${page}`).expect(200);
        readAts.push(...body.data.map((row: { readAt: string }) => row.readAt));
        cursor = body.next ?? '';
      } while (cursor);
      expect(readAts).toHaveLength(12);
      expect(readAts).toEqual([...new Set(readAts)].toSorted().toReversed());
    }
  });

  test('are taken from the ledger along its key, whatever else is in it', async () => {
    await read(alder, inward(0));
    const others = Array.from({ length: 3_000 }, (_, index) => ({
      antenna: 1 + (index % 3),
      tag: tagOf(1_000 + index, 'left'),
      readAt: at(-20_000 + index * 5),
    }));
    await ingestReads(db, { site: alder, reads: others, receivedAt: NOW });
    await db.pool.query('ANALYZE TABLE `reads`, passages');
    const { agent, statements } = await openPortal();
    statements.take();
    await agent.get(`${UNIT}/reads`).expect(200);
    const ledger = statements.take().find(({ text }) => text.includes('`reads`'));
    expect(ledger).toBeDefined();
    const plan = await db.pool.query<{ table: string; rows: string }[]>(
      `EXPLAIN ${ledger?.text ?? ''}`,
      ledger?.values,
    );
    const entered = plan.filter((row) => row.table === 'r');
    expect(entered).toMatchObject([{ key: 'reads_natural', type: 'range' }]);
    expect(Number(entered[0]?.rows)).toBeLessThan(50);
  });
});

test('a clerk sees the sightings and reads at the readers of their own sites only', async () => {
  const cairn = await buildSite(db, { code: 'CAIRN' });
  const lead = await buildReadPoint(db, { site: cairn, code: 'S1' });
  await buildAntenna(db, { readPoint: lead, number: 1 });
  await read(alder, inward(0));
  await read(cairn, [{ antenna: 1, tag: LEFT, readAt: at(10_000) }]);
  const { agent } = await openPortal({ roles: ['clerk'], sites: [alder] });
  const sightings = await agent.get(`${UNIT}/sightings`).expect(200);
  expect(sightings.body.data).toMatchObject([{ site: { code: 'ALDER' } }]);
  const reads = await agent.get(`${UNIT}/reads`).expect(200);
  expect(reads.body.data).toHaveLength(4);
  const all = await openPortal();
  expect((await all.agent.get(`${UNIT}/reads`)).body.data).toHaveLength(5);
});
