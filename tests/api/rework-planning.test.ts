import { beforeEach, describe, expect, test } from 'vitest';
import { createApp } from '../../server/app.js';
import { buildContext } from '../support/context.js';
import { useTestDatabase } from '../support/database.js';
import { buildPerson, signIn } from '../support/factories.js';
import { carTag } from '../support/ingest.js';
import {
  buildReworkYard,
  minutes,
  plannedRework,
  type ReworkYard,
} from '../support/rework-yard.js';

const db = useTestDatabase();
const context = buildContext(db);
const app = createApp(context, { clientDirectory: null });
const planned = () => plannedRework(context);
const nothing = { rebuilds: [], units: [] };
let admin: Awaited<ReturnType<typeof signIn>>;
let yard: ReworkYard;

beforeEach(async () => {
  context.clock.set('2026-11-03T00:00:00Z');
  admin = await signIn(app, await buildPerson(db));
  yard = await buildReworkYard(context);
});

const antenna = (number: number, changes: object = {}) => ({
  site: 'ALDER',
  readPoint: ['EAST', 'WEST', 'GATE'][Math.ceil(number / 2) - 1] as string,
  number,
  offsetM: number > 4 ? 0 : number % 2 ? -3 : 3,
  side: 'left',
  ...changes,
});
const point = (code: string, changes: object = {}) => ({
  site: 'ALDER',
  code,
  name: code,
  kind: 'line',
  ...changes,
});

describe('antennas', () => {
  test('stored as they are plan nothing', async () => {
    await admin
      .post('/api/antennas')
      .send([antenna(1), antenna(5)])
      .expect(200);
    expect(await planned()).toEqual(nothing);
  });

  test('moved along the track: while it had reads, half an hour more on either side', async () => {
    await admin
      .post('/api/antennas')
      .send(antenna(3, { offsetM: -5 }))
      .expect(200);
    expect(await planned()).toEqual({
      rebuilds: [{ label: 'Antenna 3 at ALDER moved to −5 m', spans: [['WEST', 30, 90]] }],
      units: [],
    });
  });

  test('put on the other side', async () => {
    await admin
      .post('/api/antennas')
      .send(antenna(1, { side: 'right' }))
      .expect(200);
    const { rebuilds } = await planned();
    expect(rebuilds).toEqual([
      { label: 'Antenna 1 at ALDER put on the right', spans: [['EAST', -30, 150]] },
    ]);
  });

  test('moved to another read point: both, and the tracks beside them', async () => {
    await admin
      .post('/api/antennas')
      .send(antenna(4, { readPoint: 'GATE' }))
      .expect(200);
    const { rebuilds } = await planned();
    expect(rebuilds).toEqual([
      {
        label: 'Antenna 4 at ALDER moved to read point GATE',
        // West has one antenna left, and the gate several offsets: that tells on all they read.
        spans: [
          ['EAST', 30, 90],
          ['GATE', 30, 270],
          ['WEST', 30, 90],
        ],
      },
    ]);
  });

  test('a second offset changes how all of the read point is read', async () => {
    await admin
      .post('/api/antennas')
      .send(antenna(6, { offsetM: 6 }))
      .expect(200);
    const { rebuilds } = await planned();
    expect(rebuilds).toEqual([
      { label: 'Antenna 6 at ALDER moved to +6 m', spans: [['GATE', 210, 270]] },
    ]);
  });

  test('new: what it read before anybody knew of it', async () => {
    await yard.send([[9, carTag(1), 300]]);
    await yard.drain();
    const added = { ...antenna(1), number: 9, readPoint: 'EAST' };
    await admin.post('/api/antennas').send(added).expect(200);
    const { rebuilds } = await planned();
    expect(rebuilds).toEqual([
      {
        label: 'Antenna 9 at ALDER added',
        spans: [
          ['EAST', 270, 330],
          ['WEST', 270, 330],
        ],
      },
    ]);
  });

  test('that have read nothing plan nothing', async () => {
    await admin
      .post('/api/antennas')
      .send({ ...antenna(1), number: 20 })
      .expect(200);
    expect(await planned()).toEqual(nothing);
  });

  test('several in one request make one rebuild', async () => {
    const sent = [antenna(1, { offsetM: -4 }), antenna(2), antenna(3, { offsetM: -4 })];
    await admin.post('/api/antennas').send(sent).expect(200);
    const { rebuilds } = await planned();
    expect(rebuilds).toEqual([
      {
        label: 'Antenna 1 at ALDER moved to −4 m, and 1 more',
        spans: [
          ['EAST', -30, 150],
          ['WEST', 30, 90],
        ],
      },
    ]);
  });

  test('a body that is refused plans nothing', async () => {
    const sent = [antenna(1, { offsetM: -4 }), { ...antenna(2), readPoint: 'NOWHERE' }];
    await admin.post('/api/antennas').send(sent).expect(400);
    expect(await planned()).toEqual(nothing);
  });

  test('what is frozen is not made anew', async () => {
    await db.pool.query('UPDATE config_state SET frozen_before = ?', [minutes(100)]);
    await admin
      .post('/api/antennas')
      .send([antenna(1, { offsetM: -4 }), antenna(3, { offsetM: -4 })]);
    const { rebuilds } = await planned();
    expect(rebuilds.map(({ spans }) => spans)).toEqual([[['EAST', 100, 150]]]);
  });
});

describe('read points', () => {
  test('renamed, or stored as they are, plan nothing', async () => {
    await admin
      .post('/api/read-points')
      .send(point('EAST', { name: 'Other' }))
      .expect(200);
    expect(await planned()).toEqual(nothing);
  });

  test('with another pass gap: all that was read there', async () => {
    await admin
      .post('/api/read-points')
      .send(point('EAST', { passGapSeconds: 300 }))
      .expect(200);
    expect(await planned()).toEqual({
      rebuilds: [
        { label: 'Pass gap of read point EAST at ALDER set to 300 s', spans: [['EAST', -30, 150]] },
      ],
      units: [],
    });
  });

  test('with another visit gap: the track beside it too', async () => {
    await admin
      .post('/api/read-points')
      .send(point('EAST', { visitGapSeconds: 30 }))
      .expect(200);
    const { rebuilds } = await planned();
    expect(rebuilds[0]?.spans).toEqual([
      ['EAST', -30, 150],
      ['WEST', 30, 90],
    ]);
  });

  test('between other places: what was read there and beside it, and the cars that were there', async () => {
    const changes = { decreasingPlace: { site: 'MILL' } };
    await admin.post('/api/read-points').send(point('EAST', changes)).expect(200);
    expect(await planned()).toEqual({
      rebuilds: [
        {
          label: 'Places of read point EAST at ALDER changed',
          // Beside the gate from now on, no longer beside West, which has another track.
          spans: [
            ['EAST', -30, 150],
            ['GATE', 210, 270],
            ['WEST', 30, 90],
          ],
        },
      ],
      units: ['QTKX1', 'QTKX2'],
    });
  });

  test('with other drill minutes: stays alone', async () => {
    await admin
      .post('/api/read-points')
      .send(point('WEST', { drillMinutes: 5 }))
      .expect(200);
    expect(await planned()).toEqual({ rebuilds: [], units: ['QTKX3'] });
  });
});

describe('sites and routes', () => {
  const alder = {
    code: 'ALDER',
    name: 'Alder',
    kind: 'yard',
    latitude: 45,
    longitude: -93,
    timeZone: 'UTC',
  };
  const all = ['QTKX1', 'QTKX2', 'QTKX3', 'QTKX4'];
  /** Without an offset of its own and without wheel sensors the gate tells no direction. */
  const undirected = [['GATE', 210, 270]];

  test('moved on the map, renamed or stored as they are plan nothing', async () => {
    await admin
      .post('/api/sites')
      .send({ ...alder, name: 'Alder Yard', latitude: 46, timeZone: 'America/Chicago' })
      .expect(200);
    expect(await planned()).toEqual(nothing);
  });

  test('return hours: the cars that were there, and passes whose direction history tells', async () => {
    await admin
      .post('/api/sites')
      .send({ ...alder, returnHours: 8 })
      .expect(200);
    expect(await planned()).toEqual({
      rebuilds: [{ label: 'Return hours of ALDER set to 8', spans: undirected }],
      units: all,
    });
  });

  test('from a yard to a point on the line', async () => {
    await admin
      .post('/api/sites')
      .send({ ...alder, kind: 'line' })
      .expect(200);
    expect((await planned()).units).toEqual(all);
  });

  test('from one kind of place where cars stay to another plans nothing', async () => {
    await admin
      .post('/api/sites')
      .send({ ...alder, kind: 'port' })
      .expect(200);
    expect(await planned()).toEqual(nothing);
  });

  test('the dwell limit: the cars that stand there', async () => {
    const rows = await db.pool.query<{ unit_key: string }[]>(
      `SELECT unit_key FROM last_seen l JOIN units u ON u.id = l.unit_id
       WHERE l.stay_site_id = ? ORDER BY unit_key`,
      [yard.site.id],
    );
    expect(rows.length).toBeGreaterThan(0);
    await admin
      .post('/api/sites')
      .send({ ...alder, dwellLimitHours: 12 })
      .expect(200);
    expect(await planned()).toEqual({ rebuilds: [], units: rows.map((row) => row.unit_key) });
  });

  test('an edge of the route graph: every car, and passes whose direction history tells', async () => {
    const nodes = [
      { code: 'J1', name: 'J1', latitude: 45, longitude: -93 },
      { code: 'J2', name: 'J2', latitude: 45, longitude: -93 },
    ];
    const edge = { from: 'J1', to: 'J2', railMetres: 1_000, kind: 'rail', line: 'Main' };
    await admin.post('/api/routes').send({ nodes }).expect(200);
    expect(await planned()).toEqual(nothing);
    await admin
      .post('/api/routes')
      .send({ edges: [edge] })
      .expect(200);
    const first = await planned();
    expect(first).toEqual({
      rebuilds: [{ label: 'Route graph changed', spans: undirected }],
      units: all,
    });
    await admin
      .post('/api/routes')
      .send({ edges: [{ ...edge, from: 'J2', to: 'J1' }] })
      .expect(200);
    expect(await planned()).toEqual(first);
  });
});

test('an antenna that moves turns the trains round that it gave the direction of', async () => {
  const directions = async () => {
    const rows = await db.pool.query<{ read_point_id: number; direction: string }[]>(
      'SELECT read_point_id, direction FROM passes ORDER BY started_at',
    );
    return rows.map((row) => [row.read_point_id, row.direction]);
  };
  const [first, beside, second] = [yard.east.id, yard.west.id, yard.east.id];
  expect((await directions()).slice(0, 3)).toEqual([
    [first, 'increasing'],
    [beside, 'increasing'],
    [second, 'increasing'],
  ]);
  await admin
    .post('/api/antennas')
    .send(antenna(1, { offsetM: 9 }))
    .expect(200);
  await yard.drain();
  expect((await directions()).slice(0, 3)).toEqual([
    [first, 'decreasing'],
    [beside, 'increasing'],
    [second, 'decreasing'],
  ]);
  const { body } = await admin.get('/api/rebuilds').expect(200);
  expect(body.data).toMatchObject([
    { label: 'Antenna 1 at ALDER moved to +9 m', state: 'done', doneShare: 1 },
  ]);
});
