import type { AddressInfo } from 'node:net';
import type { Server } from 'node:http';
import { afterEach, describe, expect, it, vi } from 'vitest';
import { demoCredentials } from '../../server/simulator/demo-credentials.js';
import { rotateReaderTokens } from '../../server/simulator/rotate-reader-tokens.js';
import { startSimulator, type Simulator } from '../../server/simulator/start-simulator.js';
import { trafficBetween } from '../../server/simulator/traffic.js';
import { world } from '../../server/simulator/world.js';
import { buildClock, buildContext } from '../support/context.js';
import { useTestDatabase } from '../support/database.js';
import { seedDemo } from '../support/demo-seed.js';
import { buildIngestApp } from '../support/ingest.js';

const MINUTE = 60_000;
const start = '2026-02-17T16:00:00.000Z';
const db = useTestDatabase();
const running: { simulator?: Simulator; server?: Server } = {};

function listen(context: ReturnType<typeof buildContext>, port = 0): Promise<number> {
  return new Promise((resolve) => {
    const server = buildIngestApp(context).listen(port, '127.0.0.1', () => {
      resolve((server.address() as AddressInfo).port);
    });
    running.server = server;
  });
}

function hangUp(): Promise<void> {
  const { server } = running;
  delete running.server;
  server?.closeAllConnections();
  return new Promise((resolve) => (server ? server.close(() => resolve()) : resolve()));
}

/** How many different reads and wheel records reach the server in that span. */
function expected(from: number, to: number) {
  const sent = trafficBetween(from, to);
  const keys = sent.flatMap((each) =>
    each.kind === 'read' ? [`${each.site} ${each.antenna} ${each.readAt} ${each.tag}`] : [],
  );
  return {
    reads: new Set(keys).size,
    wheels: sent.filter(({ kind }) => kind === 'wheels').length,
  };
}

async function stored() {
  const [row] = await db.pool.query<{ reads: number; wheels: number }[]>(
    'SELECT (SELECT COUNT(*) FROM `reads`) AS `reads`, (SELECT COUNT(*) FROM wheel_records) AS wheels',
  );
  return row;
}

/** How many movement and hand reports came in from that instant on. */
async function toldSince(from: number): Promise<number> {
  const since = new Date(from);
  const [row] = await db.pool.query<{ n: number }[]>(
    `SELECT (SELECT COUNT(*) FROM movement_reports WHERE received_at >= ?)
       + (SELECT COUNT(*) FROM hand_reports WHERE received_at >= ?) AS n`,
    [since, since],
  );
  return Number(row?.n ?? 0);
}

afterEach(async () => {
  await running.simulator?.stop();
  delete running.simulator;
  await hangUp();
});

describe('live traffic', () => {
  it('comes over HTTP as the clock goes on, none of it lost or added', async () => {
    await seedDemo(db);
    const clock = buildClock(start);
    const context = buildContext(db, { clock });
    const tokens = await rotateReaderTokens(context);
    const errors: unknown[] = [];
    const address = `http://127.0.0.1:${await listen(context)}`;
    running.simulator = startSimulator({
      address,
      tokens,
      clock,
      onError: (error) => errors.push(error),
      intervalMs: 5,
    });
    const from = Date.parse(start);
    clock.advance(60 * MINUTE);
    await vi.waitFor(
      async () => expect(await stored()).not.toEqual({ reads: 0, wheels: 0 }),
      20_000,
    );
    clock.advance(120 * MINUTE);
    const wanted = expected(from, from + 180 * MINUTE);
    expect(wanted.reads).toBeGreaterThan(200);
    await vi.waitFor(async () => expect(await stored()).toEqual(wanted), 20_000);
    expect(errors).toEqual([]);
  });

  it('brings what railroad and clerk tell, each once, through their own doors', async () => {
    await seedDemo(db);
    const spans = [
      { from: Date.UTC(2026, 1, 14, 5, 50), hours: 1 },
      { from: Date.UTC(2026, 1, 14, 14, 10), hours: 1 },
    ];
    const errors: unknown[] = [];
    for (const { from, hours } of spans) {
      const clock = buildClock(new Date(from).toISOString());
      const context = buildContext(db, { clock });
      running.simulator = startSimulator({
        address: `http://127.0.0.1:${await listen(context)}`,
        ...(await demoCredentials(context)),
        clock,
        onError: (error) => errors.push(error),
        intervalMs: 5,
      });
      clock.advance(hours * 60 * MINUTE);
      const told = trafficBetween(from, from + hours * 60 * MINUTE);
      const wanted = told.filter(({ kind }) => kind === 'report' || kind === 'hand').length;
      expect(wanted).toBeGreaterThan(0);
      await vi.waitFor(async () => expect(await toldSince(from)).toBe(wanted), 20_000);
      await running.simulator.stop();
      await hangUp();
    }
    expect(errors).toEqual([]);
    const reported = await db.pool.query<{ unit: string; seen: number; by: string }[]>(
      `SELECT h.unit_compact AS unit, h.seen, p.email AS \`by\`
         FROM hand_reports h JOIN people p ON p.id = h.reported_by`,
    );
    expect(reported).toEqual([
      { unit: world.branchCars.byHand, seen: 1, by: 'clerk@fishplate.example' },
    ]);
  });

  it('waits out a server that is away and then sends what it kept', async () => {
    await seedDemo(db);
    const clock = buildClock(start);
    const context = buildContext(db, { clock });
    const tokens = await rotateReaderTokens(context);
    const errors: unknown[] = [];
    const port = await listen(context);
    await hangUp();
    running.simulator = startSimulator({
      address: `http://127.0.0.1:${port}`,
      tokens,
      clock,
      onError: (error) => errors.push(error),
      intervalMs: 5,
    });
    const from = Date.parse(start);
    clock.advance(120 * MINUTE);
    await vi.waitFor(() => expect(errors.length).toBeGreaterThan(0), 20_000);
    await listen(context, port);
    const wanted = expected(from, from + 120 * MINUTE);
    await vi.waitFor(async () => expect(await stored()).toEqual(wanted), 30_000);
  });

  it('stops at once, whatever is under way', async () => {
    await seedDemo(db);
    const clock = buildClock(start);
    const errors: unknown[] = [];
    const simulator = startSimulator({
      address: 'http://127.0.0.1:1',
      tokens: new Map(world.sites.map(({ code }) => [code, 'wrong'])),
      clock,
      onError: (error) => errors.push(error),
      intervalMs: 5,
    });
    clock.advance(120 * MINUTE);
    await vi.waitFor(() => expect(errors.length).toBeGreaterThan(0), 20_000);
    await simulator.stop();
    const sofar = errors.length;
    await simulator.stop();
    expect(errors).toHaveLength(sofar);
  });

  it('gives each site a new token, of which the database keeps the hash alone', async () => {
    await seedDemo(db);
    const context = buildContext(db);
    const first = await rotateReaderTokens(context);
    const second = await rotateReaderTokens(context);
    expect([...second.keys()].sort()).toEqual(world.sites.map(({ code }) => code).sort());
    expect(new Set([...first.values(), ...second.values()]).size).toBe(2 * world.sites.length);
    const rows = await db.pool.query<{ token_hash: Buffer; revoked_at: Date | null }[]>(
      'SELECT token_hash, revoked_at FROM reader_tokens',
    );
    expect(rows.filter(({ revoked_at }) => revoked_at === null)).toHaveLength(world.sites.length);
    const hashes = rows.map(({ token_hash }) => token_hash.toString('latin1'));
    expect([...second.values()].filter((token) => hashes.includes(token))).toEqual([]);
  });
});
