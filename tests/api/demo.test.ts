import { describe, expect, it } from 'vitest';
import type { Database } from '../../server/lib/database.js';
import { seedTraffic, type SeedProgress } from '../../server/simulator/seed-traffic.js';
import { trafficBetween } from '../../server/simulator/traffic.js';
import { truthBetween } from '../../server/simulator/truth-between.js';
import { world } from '../../server/simulator/world.js';
import { buildClock, buildContext } from '../support/context.js';
import { useTestDatabase } from '../support/database.js';
import { agreementLine, agreementOf } from '../support/demo-agreement.js';
import { demoSeeders, foundInDatabase, seedDemo } from '../support/demo-seed.js';

const HOUR = 3_600_000;
const DAY = 24 * HOUR;
const until = new Date('2026-02-18T06:00:00Z');
const db = useTestDatabase();
const context = () => buildContext(db, { clock: buildClock(until.toISOString()) });

const tables = [
  'organisations',
  'people',
  'person_sites',
  'sites',
  'read_points',
  'antennas',
  'route_nodes',
  'route_edges',
  'units',
  'identities',
  'tags',
];
const ledger = ['reads', 'work', 'held', 'wheel_records'];

async function counts({ pool }: Database, names: string[]): Promise<Record<string, number>> {
  const entries = await Promise.all(
    names.map(async (name) => {
      const [row] = await pool.query<{ n: number }[]>(`SELECT COUNT(*) AS n FROM \`${name}\``);
      return [name, row?.n ?? 0] as const;
    }),
  );
  return Object.fromEntries(entries);
}

describe('the demo seeders', () => {
  it('load the whole region, and change nothing when they run again', async () => {
    await seedDemo(db);
    const first = await counts(db, tables);
    const registered = world.units.filter(({ owner }) => owner !== null);
    expect(first).toMatchObject({
      organisations: world.organisations.length,
      people: 5,
      sites: world.sites.length,
      read_points: world.readPoints.length,
      route_edges: world.edges.length,
      units: registered.length,
      identities: registered.length,
      tags: registered.flatMap(({ tags }) => tags).length + 1,
    });
    await db.pool.query("UPDATE sites SET dwell_limit_hours = 12 WHERE code = 'ALDER'");
    await seedDemo(db);
    expect(await counts(db, tables)).toEqual(first);
    const [alder] = await db.pool.query<{ dwell_limit_hours: number }[]>(
      "SELECT dwell_limit_hours FROM sites WHERE code = 'ALDER'",
    );
    expect(alder?.dwell_limit_hours).toBe(12);
  });

  it('tell every cache that the configuration changed', async () => {
    const version = async () => {
      const [row] = await db.pool.query<{ version: number }[]>('SELECT version FROM config_state');
      return row?.version ?? 0;
    };
    const before = await version();
    await seedDemo(db);
    const seeded = await version();
    expect(seeded).toBeGreaterThan(before);
    await seedDemo(db);
    expect(await version()).toBe(seeded);
  });

  it('take everything away again, last first', async () => {
    await seedDemo(db);
    for (const seeder of demoSeeders().reverse()) {
      await seeder.down(db.sequelize.getQueryInterface());
    }
    const left = Object.values(await counts(db, tables));
    expect(left.every((count) => count === 0)).toBe(true);
  });
});

describe('the generator', () => {
  it('writes to no table: only the ingest door does', async () => {
    await seedDemo(db);
    const names = [...tables, ...ledger];
    const before = await counts(db, names);
    expect(trafficBetween(until.getTime() - DAY, until.getTime()).length).toBeGreaterThan(1_000);
    expect(await counts(db, names)).toEqual(before);
    expect(before).toMatchObject({ reads: 0, work: 0, wheel_records: 0 });
  });
});

describe('the backfill of two days', () => {
  it('becomes the history that was true', async () => {
    await seedDemo(db);
    const seen: SeedProgress[] = [];
    const stored = await seedTraffic(context(), {
      until,
      days: 2,
      onProgress: (progress) => seen.push(progress),
    });
    const after = await counts(db, [...ledger, 'dirty_units']);
    expect(after).toMatchObject({ reads: stored, work: 0, dirty_units: 0 });
    expect(stored).toBeGreaterThan(10_000);
    expect(seen[0]).toMatchObject({ total: 48, unit: 'hours of traffic' });
    expect(seen.at(-1)).toEqual({ done: stored, total: stored, unit: 'reads taken up' });

    const held = await db.pool.query<{ code: string }[]>('SELECT DISTINCT code FROM held');
    const reasons = held.map(({ code }) => code);
    expect(reasons).toEqual(
      expect.arrayContaining(['unmapped-epc', 'check-failed', 'not-equipment', 'unknown-antenna']),
    );

    const doubted = await db.pool.query<{ unit: string }[]>(
      'SELECT DISTINCT u.unit_key AS unit FROM doubts d JOIN units u ON u.id = d.unit_id',
    );
    expect(doubted.map(({ unit }) => unit)).toEqual([world.branchCars.robbed]);

    const found = await foundInDatabase(db);
    const truth = truthBetween(until.getTime() - 2 * DAY, until.getTime() - 3 * HOUR);
    const sensors = agreementOf(found, truth, 'sensors');
    const offsets = agreementOf(found, truth, 'twoOffsets');
    console.info(agreementLine('sensors', sensors));
    console.info(agreementLine('twoOffsets', offsets));
    expect(sensors.directionRight).toBeGreaterThanOrEqual(0.992);
    expect(sensors.directionWrong).toBeLessThanOrEqual(0.0015);
    expect(sensors.arrivals).toBeGreaterThanOrEqual(0.99);
    expect(sensors.departures).toBeGreaterThanOrEqual(0.99);
    expect(offsets.directionRight).toBeGreaterThanOrEqual(0.997);
    expect(offsets.directionWrong).toBe(0);
    expect(offsets.arrivals).toBeGreaterThanOrEqual(0.99);
    expect(offsets.departures).toBeGreaterThanOrEqual(0.99);
  });

  it('goes on where it stopped, and finds duplicates only when it is repeated', async () => {
    await seedDemo(db);
    const earlier = new Date(until.getTime() - DAY);
    const before = await seedTraffic(context(), { until: earlier, days: 1 });
    const added = await seedTraffic(context(), { until, days: 45 });
    expect(added).toBeGreaterThan(0);
    expect(await seedTraffic(context(), { until, days: 45 })).toBe(0);
    const inTwo = await counts(db, ['reads', 'held', 'wheel_records', 'passages', 'stays']);
    expect(inTwo.reads).toBe(before + added);
    const [span] = await db.pool.query<{ first: Date }[]>(
      'SELECT MIN(read_at) AS first FROM `reads`',
    );
    expect(span?.first.getTime()).toBeGreaterThan(earlier.getTime() - DAY - 3 * HOUR);
  });

  it('receives each read soon after it was read, but for the site that sends late', async () => {
    await seedDemo(db);
    await seedTraffic(context(), { until, days: 1 });
    const rows = await db.pool.query<{ code: string; late: number; early: number }[]>(
      `SELECT s.code, MAX(TIMESTAMPDIFF(SECOND, read_at, received_at)) AS late,
         MIN(TIMESTAMPDIFF(SECOND, read_at, received_at)) AS early
         FROM \`reads\` r JOIN sites s ON s.id = r.site_id GROUP BY s.code`,
    );
    expect(rows.every(({ early }) => early >= 0)).toBe(true);
    const punctual = rows.filter(({ code }) => code !== 'QUERN');
    expect(punctual.every(({ late }) => late < 2 * 3_600)).toBe(true);
    expect(rows.find(({ code }) => code === 'QUERN')?.late).toBeGreaterThan(7_000);
  });
});
