import { beforeEach, describe, expect, test } from 'vitest';
import { createApp } from '../../server/app.js';
import { movementsAnswer } from '../../server/contract/movements.js';
import { passAnswer } from '../../server/contract/passes.js';
import { encodeAei } from '../../server/domain/identifiers/aei.js';
import { aarIdentity } from '../../server/domain/identifiers/identity.js';
import { ingestReads } from '../../server/ingest/ingest-reads.js';
import { ingestWheels } from '../../server/ingest/ingest-wheels.js';
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
  buildUnit,
  signIn,
} from '../support/factories.js';

const db = useTestDatabase();
const START = new Date('2026-03-10T06:00:00.000Z');
const NOW = new Date('2026-03-10T18:00:00.000Z');
const after = (seconds: number) => new Date(START.getTime() + seconds * 1_000);
const idAt = (seconds: number) => `ALDER-N1-${after(seconds).getTime().toString(36)}`;
const tagOf = (number: number) =>
  encodeAei({ groupCode: 19, initial: 'QTKX', number, side: 'left', lengthDm: 170 });

let alder: Site;
let mine: Organisation;

beforeEach(async () => {
  alder = await buildSite(db, { code: 'ALDER', name: 'Alder Bend Yard' });
  const lead = await buildReadPoint(db, {
    site: alder,
    code: 'N1',
    decreasingSite: alder,
    increasingSite: null,
  });
  await buildAntenna(db, { readPoint: lead, number: 1, offsetM: 0, side: 'left' });
  mine = await buildOrganisation(db, {});
  await buildUnit(db, { identity: aarIdentity('QTKX', 1), owner: mine });
});

async function read(seconds: number, ...numbers: number[]): Promise<void> {
  const reads = numbers.map((number, index) => ({
    antenna: 1,
    tag: tagOf(number),
    readAt: after(seconds + index).toISOString(),
  }));
  await ingestReads(db, { site: alder, reads, receivedAt: NOW });
  await fold();
}

async function fold(): Promise<void> {
  const context = buildContext(db);
  context.clock.set(NOW);
  const projector = createProjector(context);
  await projector.drain();
  await projector.stop();
}

async function portal(values: Parameters<typeof buildPerson>[1] = {}) {
  const context = buildContext(db);
  context.clock.set(NOW);
  return signIn(createApp(context), await buildPerson(db, values));
}

describe('a pass by its id', () => {
  test('says what went by, in order', async () => {
    await read(0, 2, 1);
    const { body } = await (await portal()).get(`/api/passes/${idAt(0)}`).expect(200);
    expect(passAnswer.parse(body)).toEqual(body);
    expect(body).toMatchObject({
      data: {
        id: idAt(0),
        site: { code: 'ALDER' },
        readPoint: { code: 'N1' },
        startedAt: after(0).toISOString(),
        endedAt: after(1).toISOString(),
        direction: 'unknown',
        directionBasis: null,
        units: [
          { position: 1, unitId: 'QTKX2', kind: 'car' },
          { position: 2, unitId: 'QTKX1', kind: 'car' },
        ],
      },
    });
  });

  test('names an owner only the own cars', async () => {
    await read(0, 2, 1);
    const owner = await portal({ roles: ['owner'], organisation: mine });
    const { body } = await owner.get(`/api/passes/${idAt(0)}`).expect(200);
    expect(body).toMatchObject({
      data: {
        units: [
          { position: 1, unitId: null, display: null, kind: 'car' },
          { position: 2, unitId: 'QTKX1' },
        ],
      },
    });
  });

  test('is nothing to an owner without a car in it, nor to a clerk of another site', async () => {
    await read(0, 2);
    const owner = await portal({ roles: ['owner'], organisation: mine });
    await owner.get(`/api/passes/${idAt(0)}`).expect(404);
    const clerk = await portal({ roles: ['clerk'] });
    await clerk.get(`/api/passes/${idAt(0)}`).expect(404);
  });

  test('404 where nothing went by, and for what is no id', async () => {
    const agent = await portal();
    await agent.get(`/api/passes/${idAt(0)}`).expect(404);
    await agent.get('/api/passes/ALDER').expect(404);
    await agent.get('/api/passes/alder-n1-1').expect(404);
  });
});

describe('former ids', () => {
  test('a pass that began earlier than was known keeps its links', async () => {
    await read(10, 2);
    const agent = await portal();
    await agent.get(`/api/passes/${idAt(10)}`).expect(200);
    await read(0, 1);
    const { headers } = await agent.get(`/api/passes/${idAt(10)}`).expect(308);
    expect(headers['location']).toBe(`/api/passes/${idAt(0)}`);
  });

  test('two passes that turn out to be one are found by either id', async () => {
    await read(0, 1);
    await read(2_400, 2);
    const agent = await portal();
    await agent.get(`/api/passes/${idAt(2_400)}`).expect(200);
    await read(1_200, 3);
    const { headers } = await agent.get(`/api/passes/${idAt(2_400)}`).expect(308);
    expect(headers['location']).toBe(`/api/passes/${idAt(0)}`);
  });

  test('who may not see the pass is not told where it went', async () => {
    await read(10, 2);
    await read(0, 3);
    const owner = await portal({ roles: ['owner'], organisation: mine });
    await owner.get(`/api/passes/${idAt(10)}`).expect(404);
  });
});

describe('passing through', () => {
  const record = async (seconds: number, direction: 'increasing' | 'decreasing') => {
    const record = {
      site: 'ALDER',
      readPoint: 'N1',
      startedAt: after(seconds - 2),
      endedAt: after(seconds + 30),
      axles: 4,
      direction,
    };
    await ingestWheels(db, { site: alder, record, receivedAt: NOW });
  };

  test.each([
    [[1, 2, 3, 4], true],
    [[1, 2, 3], false],
  ])('four of five left with it: %j', async (others, through) => {
    await record(0, 'decreasing');
    await record(3_600, 'increasing');
    await read(0, 1, 2, 3, 4, 5);
    await read(3_600, ...others);
    const { body } = await (await portal()).get('/api/equipment/QTKX1/movements').expect(200);
    expect(movementsAnswer.parse(body).data.stays).toMatchObject([{ through }]);
  });

  test('nobody can say of one that is still there', async () => {
    await record(0, 'decreasing');
    await read(0, 1, 2);
    const { body } = await (await portal()).get('/api/equipment/QTKX1/movements').expect(200);
    expect(movementsAnswer.parse(body).data.stays).toMatchObject([{ through: null }]);
  });
});
