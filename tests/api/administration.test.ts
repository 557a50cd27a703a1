import { beforeEach, describe, expect, test } from 'vitest';
import { createApp } from '../../server/app.js';
import { modelsOf } from '../../server/models/index.js';
import { buildContext } from '../support/context.js';
import { useTestDatabase } from '../support/database.js';
import { buildPerson, signIn } from '../support/factories.js';

const db = useTestDatabase();
type Agent = Awaited<ReturnType<typeof signIn>>;
let admin: Agent;

beforeEach(async () => {
  const person = await buildPerson(db, { email: 'chief@tests.example' });
  admin = await signIn(createApp(buildContext(db), { clientDirectory: null }), person);
});

const alder = {
  code: 'ALDER',
  name: 'Alder Bend',
  kind: 'yard',
  latitude: 44.9,
  longitude: -93.25,
  timeZone: 'America/Chicago',
};

describe('a network loaded by script', () => {
  test('stands as it was sent', async () => {
    const { body: site } = await admin.post('/api/sites').send(alder).expect(200);
    expect(site).toEqual({ data: { ...alder, returnHours: 12, dwellLimitHours: 96 } });
    const cairn = { ...alder, code: 'CAIRN', name: 'Cairn', kind: 'line', returnHours: 6 };
    await admin.post('/api/sites').send([alder, cairn]).expect(200);
    const north = {
      site: 'ALDER',
      code: 'NORTH',
      name: 'North lead',
      track: '1',
      kind: 'line',
      decreasingPlace: null,
      increasingPlace: { site: 'ALDER', track: null },
    };
    const { body: readPoint } = await admin.post('/api/read-points').send([north]).expect(200);
    expect(readPoint.data).toEqual([
      { ...north, passGapSeconds: 180, visitGapSeconds: 60, drillMinutes: 60 },
    ]);
    const antenna = { site: 'ALDER', readPoint: 'NORTH', number: 1, offsetM: -4.5, side: 'left' };
    await admin.post('/api/antennas').send(antenna).expect(200, { data: antenna });
    const { body: routes } = await admin
      .post('/api/routes')
      .send({
        nodes: [{ code: 'LARCHJ', name: 'Larch Junction', latitude: 44, longitude: -93 }],
        edges: [
          { from: 'ALDER', to: 'LARCHJ', railMetres: 12_000, kind: 'rail', line: 'Main' },
          { from: 'LARCHJ', to: 'CAIRN', railMetres: 34_000, kind: 'rail', line: 'Main' },
        ],
      })
      .expect(200);
    expect(routes.data.edges).toMatchObject([
      { from: 'ALDER', to: 'LARCHJ' },
      { from: 'LARCHJ', to: 'CAIRN' },
    ]);
    expect(await modelsOf(db.sequelize).RouteNode.count()).toBe(3);
  });
});
