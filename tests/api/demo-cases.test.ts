import request from 'supertest';
import { afterEach, beforeEach, describe, expect, test, vi } from 'vitest';
import { createApp } from '../../server/app.js';
import { demoCasesAnswer } from '../../server/contract/demo-cases.js';
import { demoCases } from '../../server/simulator/demo-cases.js';
import { showRegister } from '../../server/simulator/show-register.js';
import { seedTraffic } from '../../server/simulator/seed-traffic.js';
import { world } from '../../server/simulator/world.js';
import { buildClock, buildContext } from '../support/context.js';
import { useTestDatabase } from '../support/database.js';
import { seedDemo } from '../support/demo-seed.js';
import { buildPerson, signIn } from '../support/factories.js';

const HOUR = 3_600_000;
/** Two rounds of the branch and most of a third; every fault that comes in some rounds alone. */
const span = { from: Date.UTC(2026, 1, 10), until: Date.UTC(2026, 1, 18, 9) };
const branch = ['ROWAN', 'SORREL', 'LINNET', 'PIPIT', 'BRYONY'];
const { branchCars } = world;
const db = useTestDatabase();

async function rows<T>(statement: string, values: unknown[] = []): Promise<T[]> {
  return db.pool.query<T[]>(statement, values);
}

async function count(statement: string, values: unknown[] = []): Promise<number> {
  const [row] = await rows<{ n: number }>(`SELECT COUNT(*) AS n ${statement}`, values);
  return Number(row?.n ?? 0);
}

const passagesOf = `FROM passages p JOIN units u ON u.id = p.unit_id
  JOIN read_points r ON r.id = p.read_point_id JOIN sites s ON s.id = r.site_id`;
const staysOf = `FROM stays y JOIN units u ON u.id = y.unit_id JOIN sites s ON s.id = y.site_id
  WHERE u.unit_key = ? AND s.code = ?`;
const heldAt = 'FROM held h JOIN sites s ON s.id = h.site_id WHERE s.code = ? AND h.code = ?';

/** Looks at the database for what each case promises; true when its car shows it. */
const shows: Record<string, () => Promise<boolean>> = {
  late: async () => {
    const [car, site] = [branchCars.late, 'LINNET'];
    const [late] = await rows<{ at: Date; received: Date }>(
      `SELECT r.read_at AS at, r.received_at AS received
         FROM \`reads\` r JOIN sites s ON s.id = r.site_id JOIN tags t ON t.value = r.tag
         JOIN units u ON u.id = t.unit_id
        WHERE u.unit_key = ? AND s.code = ? AND r.received_at > r.read_at + INTERVAL 1 HOUR
        ORDER BY r.read_at LIMIT 1`,
      [car, site],
    );
    if (!late) return false;
    const { at, received } = late;
    const [here, further] = [
      await count(`${passagesOf} WHERE u.unit_key = ? AND s.code = ? AND p.first_at = ?`, [
        car,
        site,
        at,
      ]),
      await count(`${passagesOf} WHERE u.unit_key = ? AND p.first_at > ? AND p.first_at < ?`, [
        car,
        at,
        received,
      ]),
    ];
    return here === 1 && further > 0;
  },
  'slow-clock': async () =>
    (await count(
      `FROM \`reads\` r JOIN sites s ON s.id = r.site_id WHERE s.code = 'PIPIT'
         AND r.hold_code IS NULL AND r.received_at < r.read_at + INTERVAL 41 SECOND`,
    )) === 0 &&
    (await count(`${passagesOf} WHERE u.unit_key = ? AND s.code = 'PIPIT'`, [branchCars.history])) >
      0,
  'clock-ahead': async () => (await count(heldAt, ['PIPIT', 'clock-ahead'])) > 0,
  parallel: async () =>
    (await count(`${passagesOf} WHERE s.code = 'SORREL' AND p.stray = 'parallel'`)) > 5,
  beam: async () => {
    const visits = await rows<{ hours: number; role: string }>(
      `SELECT TIMESTAMPDIFF(SECOND, p.first_at, p.last_at) / 3600 AS hours, p.role ${passagesOf}
        WHERE u.unit_key = ? AND s.code = 'SORREL' AND p.read_count > 100`,
      [branchCars.inTheBeam],
    );
    return (
      visits.length === 2 && visits.every(({ hours, role }) => hours > 2.9 && role === 'presence')
    );
  },
  beside: async () => {
    const strays = await count(`${passagesOf} WHERE u.unit_key = ? AND p.stray = 'beside'`, [
      branchCars.beside,
    ]);
    const moved = await count(
      `${passagesOf} WHERE u.unit_key = ? AND r.code = 'W1' AND p.role = 'crossing'`,
      [branchCars.beside],
    );
    return strays > 20 && moved === 0;
  },
  unequipped: async () =>
    (await count(`${staysOf} AND y.departure_basis = 'inferred'`, [
      branchCars.missedExit,
      'SORREL',
    ])) > 0,
  'dead-antennas': async () =>
    (await count(`${staysOf} AND y.departure_basis = 'inferred'`, [
      branchCars.deadAntennas,
      'ROWAN',
    ])) === 1,
  'tag-moved': async () => {
    const [dated] = await rows<{ value: Buffer; unit: string }>(
      `SELECT t.value, u.unit_key AS unit FROM tags t JOIN units u ON u.id = t.unit_id
        WHERE t.valid_from IS NOT NULL`,
    );
    if (!dated) return false;
    const read = await rows<{ unit: string }>(
      `SELECT DISTINCT u.unit_key AS unit ${passagesOf} WHERE p.first_tag = ?`,
      [dated.value],
    );
    return read.length === 1 && read[0]?.unit === dated.unit && dated.unit === branchCars.lent.to;
  },
  'tag-conflict': async () => {
    const doubts = await count(
      `FROM doubts d JOIN units u ON u.id = d.unit_id JOIN read_points r ON r.id = d.read_point_id
        JOIN sites s ON s.id = r.site_id
        WHERE u.unit_key = ? AND s.code = 'PIPIT' AND d.corroborated_by IS NULL`,
      [branchCars.robbed],
    );
    return doubts >= 2 && (await count(staysOf, [branchCars.robbed, 'PIPIT'])) === 0;
  },
  'runs-round': async () => {
    const stays = await rows<{ excursions: number }>(`SELECT y.excursions ${staysOf}`, [
      branchCars.engine,
      'ROWAN',
    ]);
    return stays.length === 2 && stays.every(({ excursions }) => excursions === 1);
  },
  stops: async () => {
    const passes = await rows<{ cars: number; seconds: number }>(
      `SELECT COUNT(*) AS cars, TIMESTAMPDIFF(SECOND, MIN(p.first_at), MAX(p.last_at)) AS seconds
        ${passagesOf} WHERE s.code = 'ROWAN' AND p.direction = 'increasing'
        GROUP BY p.pass_started_at, p.pass_ordinal HAVING cars > 10`,
    );
    return passes.length === 2 && passes.every(({ seconds }) => seconds > 200);
  },
  'one-antenna': async () =>
    (await count(
      `${passagesOf} WHERE u.unit_key = ? AND s.code = 'PIPIT' AND p.direction_basis = 'history'`,
      [branchCars.history],
    )) > 0,
  trailers: async () => {
    const trailer = await count(`${passagesOf} WHERE u.unit_key = ?`, [branchCars.trailer]);
    const box = await count('FROM units WHERE unit_key = ? AND registered = 1', [branchCars.box]);
    return trailer > 4 && box === 1;
  },
  reported: async () =>
    (await count(`${staysOf} AND y.arrival_basis = 'report' AND y.departure_basis = 'report'`, [
      branchCars.reported,
      'BRYONY',
    ])) === 2,
  'by-hand': async () =>
    (await count(`${staysOf} AND y.departure_basis = 'hand'`, [branchCars.byHand, 'ALDER'])) > 0,
  'set-aside': async () => {
    const here = [
      ['SORREL', 'unknown-antenna'],
      ['ROWAN', 'not-equipment'],
      ['ROWAN', 'undecodable-tag'],
      ['ROWAN', 'too-old'],
      ['PIPIT', 'clock-ahead'],
    ];
    const counts = await Promise.all(here.map((each) => count(heldAt, each)));
    return counts.every((some) => some > 0);
  },
};

describe('what to look at in the demo', () => {
  // The seeders date a tag by the clock of the machine.
  beforeEach(() => vi.useFakeTimers({ toFake: ['Date'], now: span.until }));
  afterEach(() => vi.useRealTimers());

  test('is really there, on the car that is named', { timeout: 120_000 }, async () => {
    await seedDemo(db);
    const until = new Date(span.until);
    const context = buildContext(db, { clock: buildClock(until.toISOString()) });
    const days = (span.until - span.from) / (24 * HOUR);
    await seedTraffic(context, {
      until,
      days,
      only: ({ kind, site }) => kind === 'hand' || branch.includes(site),
    });
    expect(Object.keys(shows).sort()).toEqual(demoCases.map(({ id }) => id).sort());
    const found: Record<string, boolean> = {};
    for (const { id } of demoCases) found[id] = (await shows[id]?.()) ?? false;
    expect(found).toEqual(Object.fromEntries(demoCases.map(({ id }) => [id, true])));
  });
});

describe('GET /api/demo/cases', () => {
  const appOf = (demo: boolean) =>
    createApp(buildContext(db, { env: { demo } }), { demoCases, clientDirectory: null });

  test('names every case, and says which of its cars the asker may open', async () => {
    await seedDemo(db);
    await showRegister(db);
    const app = appOf(true);
    const administrator = await signIn(app, await buildPerson(db, { roles: ['administrator'] }));
    const all = demoCasesAnswer.parse((await administrator.get('/api/demo/cases')).body).data;
    expect(all.map(({ id }) => id)).toEqual(demoCases.map(({ id }) => id));
    expect(all.flatMap(({ cars }) => cars).every(({ opens }) => opens)).toBe(true);
    expect(all.every(({ cars, screen }) => cars.length > 0 || screen !== null)).toBe(true);
    const stranger = await signIn(app, await buildPerson(db, { roles: ['owner'] }));
    const none = demoCasesAnswer.parse((await stranger.get('/api/demo/cases')).body).data;
    expect(none.flatMap(({ cars }) => cars).some(({ opens }) => opens)).toBe(false);
  });

  test('does not exist outside of the demo, nor for nobody', async () => {
    const person = await buildPerson(db, { roles: ['administrator'] });
    await (await signIn(appOf(false), person)).get('/api/demo/cases').expect(404);
    await request(appOf(true)).get('/api/demo/cases').expect(401);
    const agent = await signIn(appOf(true), person);
    await agent.get('/api/demo/cases?limit=1').expect(400);
  });
});
