import { beforeEach, describe, expect, test } from 'vitest';
import { createApp } from '../../server/app.js';
import { ingestReads } from '../../server/ingest/ingest-reads.js';
import type { ReadPoint } from '../../server/models/read-point.js';
import type { Site } from '../../server/models/site.js';
import { createProjector } from '../../server/projections/projector.js';
import { buildContext } from '../support/context.js';
import { useTestDatabase } from '../support/database.js';
import {
  buildAntenna,
  buildPerson,
  buildReadPoint,
  buildSite,
  signIn,
} from '../support/factories.js';
import { carTag } from '../support/ingest.js';

const db = useTestDatabase();
const context = buildContext(db);
const app = createApp(context, { clientDirectory: null });
const EPC = '34140b8cac3aa24000000001';
let admin: Awaited<ReturnType<typeof signIn>>;
let site: Site;
/** Two tracks of one lead, and a gate. */
let east: ReadPoint;
let west: ReadPoint;
let gate: ReadPoint;

const minutes = (count: number) => new Date(Date.parse('2026-11-02T10:00:00Z') + count * 60_000);

beforeEach(async () => {
  context.clock.set('2026-11-03T00:00:00Z');
  admin = await signIn(app, await buildPerson(db));
  site = await buildSite(db, { code: 'ALDER', name: 'Alder', timeZone: 'UTC' });
  east = await buildReadPoint(db, { site, code: 'EAST', name: 'East', track: '1' });
  west = await buildReadPoint(db, { site, code: 'WEST', name: 'West', track: '2' });
  const industry = await buildSite(db, { code: 'MILL', kind: 'industry' });
  gate = await buildReadPoint(db, { site, code: 'GATE', name: 'Gate', decreasingSite: industry });
  for (const [readPoint, number, offsetM] of [
    [east, 1, -3],
    [east, 2, 3],
    [west, 3, -3],
    [west, 4, 3],
    [gate, 5, 0],
    [gate, 6, 0],
  ] as const) {
    await buildAntenna(db, { readPoint, number, offsetM });
  }
  await db.pool.query('UPDATE config_state SET version = version + 1');
  // Antennas 1 and 2 read cars 1 and 2 at 0 and 120 minutes; 3 and 4 car 3 at 60; 5 car 4 at 240.
  await send([
    [1, carTag(1), 0],
    [2, carTag(1), 0.02],
    [1, carTag(2), 120],
    [2, carTag(2), 120.02],
    [3, carTag(3), 60],
    [4, carTag(3), 60.02],
    [5, carTag(4), 240],
    [6, carTag(4), 240],
  ]);
  await drain();
});

async function send(reads: [antenna: number, tag: string, at: number][]): Promise<void> {
  await ingestReads(db, {
    site: { id: site.id, code: site.code },
    reads: reads.map(([antenna, tag, at]) => ({ antenna, tag, readAt: minutes(at).toISOString() })),
    receivedAt: context.clock.now(),
  });
}

async function drain(): Promise<void> {
  const projector = createProjector(context);
  await projector.drain();
  await projector.stop();
}

interface Planned {
  label: string;
  /** Read point, and from and until in minutes. */
  spans: [string, number, number][];
}

/** The rebuilds that wait, oldest first, and the units that are to be folded again. */
async function planned(): Promise<{ rebuilds: Planned[]; units: string[] }> {
  const rows = await db.pool.query<
    { id: number; label: string; code: string; since_at: Date; until_at: Date }[]
  >(
    `SELECT r.id, r.label, rp.code, s.since_at, s.until_at FROM rebuilds r
       JOIN rebuild_spans s ON s.rebuild_id = r.id JOIN read_points rp ON rp.id = s.read_point_id
     WHERE r.state = 'waiting' ORDER BY r.id, rp.code, s.since_at`,
  );
  const byId = new Map<number, Planned>();
  for (const { id, label, code, since_at: since, until_at: until } of rows) {
    const rebuild = byId.get(id) ?? { label, spans: [] };
    byId.set(id, rebuild);
    rebuild.spans.push([code, minutesOf(since), minutesOf(until)]);
  }
  const units = await db.pool.query<{ unit_key: string }[]>(
    `SELECT unit_key FROM dirty_units d JOIN units u ON u.id = d.unit_id
     WHERE d.lane = 1 AND d.from_at = '1970-01-01' ORDER BY unit_key`,
  );
  return { rebuilds: [...byId.values()], units: units.map((row) => row.unit_key) };
}

const minutesOf = (at: Date) => Math.round((at.getTime() - minutes(0).getTime()) / 60_000);
const nothing = { rebuilds: [], units: [] };
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
    await send([[9, carTag(1), 300]]);
    await drain();
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
      [site.id],
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

describe('the register', () => {
  const car = (number: number, changes: object = {}) => ({
    unit: `QTKX ${number}`,
    kind: 'car',
    ...changes,
  });

  test('a car that reads have named comes on with the very tags it has: its limits alone', async () => {
    await admin
      .post('/api/register')
      .send(car(1, { tags: [{ value: carTag(1) }] }))
      .expect(200);
    expect(await planned()).toEqual({ rebuilds: [], units: ['QTKX1'] });
    await drain();
    await admin
      .post('/api/register')
      .send(car(1, { tags: [{ value: carTag(1) }] }))
      .expect(200);
    await admin
      .post('/api/register')
      .send(car(1, { carType: 'tank car' }))
      .expect(200);
    expect(await planned()).toEqual(nothing);
  });

  test('a tag that belongs to another car: around its passages, where it was read', async () => {
    await admin
      .post('/api/register')
      .send(car(7, { tags: [{ value: carTag(2) }] }))
      .expect(200);
    expect(await planned()).toEqual({
      rebuilds: [{ label: 'Register: QTKX 7', spans: [['EAST', 90, 150]] }],
      units: [],
    });
  });

  test('a tag that moves at an instant: only what was read from then on', async () => {
    await send([
      [1, carTag(2), 500],
      [2, carTag(2), 500.02],
    ]);
    await drain();
    await admin
      .post('/api/register')
      .send([car(2), car(7)])
      .expect(200);
    await drain();
    const moved = { value: carTag(2), validFrom: minutes(400).toISOString() };
    await admin.post('/api/register/QTKX7/tags').send(moved).expect(200);
    const { rebuilds } = await planned();
    expect(rebuilds).toEqual([{ label: 'Tag put on QTKX 7', spans: [['EAST', 470, 530]] }]);
  });

  test('an EPC that nobody knew: the reads that were set aside for it', async () => {
    await send([
      [3, EPC, 600],
      [4, EPC, 600.02],
      [5, EPC, 700],
    ]);
    await drain();
    await admin
      .post('/api/register')
      .send(car(7, { tags: [{ value: EPC }] }))
      .expect(200);
    const { rebuilds } = await planned();
    expect(rebuilds.map(({ spans }) => spans)).toEqual([
      [
        ['GATE', 670, 730],
        ['WEST', 570, 630],
      ],
    ]);
    await drain();
    await admin
      .post('/api/register')
      .send(car(7, { tags: [] }))
      .expect(200);
    expect((await planned()).rebuilds.map(({ spans }) => spans)).toEqual([
      [
        ['GATE', 670, 730],
        ['WEST', 570, 630],
      ],
    ]);
  });

  test('a car that turns out a locomotive: around all of its passages', async () => {
    await admin
      .post('/api/register')
      .send(car(3, { kind: 'locomotive' }))
      .expect(200);
    expect(await planned()).toEqual({
      rebuilds: [{ label: 'Register: QTKX 3', spans: [['WEST', 30, 90]] }],
      units: ['QTKX3'],
    });
  });

  test('a number that another car carries from an instant on', async () => {
    await admin
      .post('/api/register')
      .send([car(2), car(7)])
      .expect(200);
    await drain();
    const from = minutes(60).toISOString();
    await admin.post('/api/register/QTKX2/renumber').send({ unit: 'QTKX 8', from }).expect(200);
    const { rebuilds } = await planned();
    expect(rebuilds).toEqual([{ label: 'QTKX 2 renumbered QTKX 8', spans: [['EAST', 90, 150]] }]);
  });

  test('taken off: its limits go', async () => {
    await admin.post('/api/register').send(car(4)).expect(200);
    await drain();
    await admin.delete('/api/register/QTKX4').expect(204);
    expect(await planned()).toEqual({ rebuilds: [], units: ['QTKX4'] });
  });
});

test('an antenna that moves turns the trains round that it gave the direction of', async () => {
  const directions = async () => {
    const rows = await db.pool.query<{ read_point_id: number; direction: string }[]>(
      'SELECT read_point_id, direction FROM passes ORDER BY started_at',
    );
    return rows.map((row) => [row.read_point_id, row.direction]);
  };
  const [first, beside, second] = [east.id, west.id, east.id];
  expect((await directions()).slice(0, 3)).toEqual([
    [first, 'increasing'],
    [beside, 'increasing'],
    [second, 'increasing'],
  ]);
  await admin
    .post('/api/antennas')
    .send(antenna(1, { offsetM: 9 }))
    .expect(200);
  await drain();
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
