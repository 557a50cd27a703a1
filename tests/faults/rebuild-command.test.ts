import { spawn } from 'node:child_process';
import { once } from 'node:events';
import path from 'node:path';
import { beforeEach, describe, expect, test, vi } from 'vitest';
import { cleanEnvironment } from '../../scripts/lib/settings.mjs';
import { ingestReads } from '../../server/ingest/ingest-reads.js';
import type { ReadPoint } from '../../server/models/read-point.js';
import type { Site } from '../../server/models/site.js';
import { createProjector } from '../../server/projections/projector.js';
import { buildContext } from '../support/context.js';
import { testDatabaseUrl, useTestDatabase } from '../support/database.js';
import { buildAntenna, buildReadPoint, buildSite } from '../support/factories.js';
import { carTag } from '../support/ingest.js';

const script = path.resolve(import.meta.dirname, '../../scripts/rebuild.mjs');
const db = useTestDatabase();
const context = buildContext(db);
const patience = { timeout: 120_000, interval: 50 };
const BEGIN = Date.parse('2026-11-02T10:00:00Z');
const HOUR_MS = 3_600_000;
const TRAINS = 8;
let yard: { site: Site; point: ReadPoint };
let port: { site: Site; point: ReadPoint };

beforeEach(async () => {
  context.clock.set('2026-11-03T00:00:00Z');
  yard = await buildPlace('ALDER');
  port = await buildPlace('QUAY');
  for (let train = 0; train < TRAINS; train += 1) {
    await sendTrain(yard.site, BEGIN + train * HOUR_MS);
    await sendTrain(port.site, BEGIN + (train + 0.5) * HOUR_MS);
  }
  await drain();
});

async function buildPlace(code: string) {
  const site = await buildSite(db, { code });
  const point = await buildReadPoint(db, { site });
  await buildAntenna(db, { readPoint: point, number: 1, offsetM: -3 });
  await buildAntenna(db, { readPoint: point, number: 2, offsetM: 3 });
  await db.pool.query('UPDATE config_state SET version = version + 1');
  return { site, point };
}

async function sendTrain(site: Site, at: number): Promise<void> {
  const reads = [1, 2, 3].flatMap((car) =>
    [1, 2].map((antenna) => ({
      antenna,
      tag: carTag(car),
      readAt: new Date(at + car * 2_000 + antenna * 500).toISOString(),
    })),
  );
  const receivedAt = context.clock.now();
  await ingestReads(db, { site: { id: site.id, code: site.code }, reads, receivedAt });
}

async function drain(): Promise<void> {
  const projector = createProjector(context);
  await projector.drain();
  await projector.stop();
}

async function history(): Promise<string[]> {
  const dumped: string[] = [];
  for (const table of ['passages', 'passes', 'stays', 'legs', 'last_seen']) {
    const rows = await db.pool.query<object[]>(`SELECT * FROM ${table}`);
    dumped.push(...rows.map((row) => `${table} ${JSON.stringify(row)}`));
  }
  return dumped.sort();
}

/** As if a rule had been another when these were written. */
async function spoil({ id }: ReadPoint): Promise<void> {
  await db.pool.query(
    "UPDATE passages SET direction = 'decreasing', speed_kmh = 1 WHERE read_point_id = ?",
    [id],
  );
  await db.pool.query("UPDATE passes SET direction = 'decreasing' WHERE read_point_id = ?", [id]);
}

async function directionsAt({ id }: ReadPoint): Promise<string[]> {
  const rows = await db.pool.query<{ direction: string }[]>(
    'SELECT direction FROM passes WHERE read_point_id = ? ORDER BY started_at',
    [id],
  );
  return rows.map((row) => row.direction);
}

function run(...parameters: string[]) {
  const child = spawn(process.execPath, [script, ...parameters], {
    env: cleanEnvironment({ DATABASE_URL: testDatabaseUrl() }),
    stdio: ['ignore', 'pipe', 'pipe'],
  });
  let text = '';
  child.stdout.on('data', (chunk: Buffer) => (text += chunk.toString()));
  child.stderr.on('data', (chunk: Buffer) => (text += chunk.toString()));
  const ended = once(child, 'exit').then(([code]) => code as number | null);
  return { child, output: () => text, ended };
}

const states = async () => {
  const rows = await db.pool.query<{ state: string }[]>('SELECT state FROM rebuilds ORDER BY id');
  return rows.map(({ state }) => state);
};

describe('npm run rebuild', { timeout: 240_000 }, () => {
  test('makes everything anew as it was, and says what it did', async () => {
    const before = await history();
    await spoil(yard.point);
    await spoil(port.point);
    await db.pool.query('DELETE FROM passages LIMIT 3');
    const { output, ended } = run('--all');
    expect(await ended, output()).toBe(0);
    expect(output()).toMatch(/100 % of \d+ hours of reads/);
    expect(output()).toMatch(/History of 2 read points made anew in \d+\.\d s\.\n$/);
    expect(await states()).toEqual(['done']);
    expect(await history()).toEqual(before);
  });

  test('makes only that site and that time anew which was asked for', async () => {
    const before = await history();
    await spoil(yard.point);
    await spoil(port.point);
    const from = new Date(BEGIN + (TRAINS - 1.1) * HOUR_MS).toISOString();
    const { output, ended } = run('--site', 'ALDER', '--from', from);
    expect(await ended, output()).toBe(0);
    const [atYard, atPort] = [await directionsAt(yard.point), await directionsAt(port.point)];
    expect(atYard.at(-1)).toBe('increasing');
    // What stands right before it is gone through again too, what lies well before it is not.
    expect(atYard.slice(0, 3)).toEqual(Array(3).fill('decreasing'));
    expect(atPort).toEqual(Array(TRAINS).fill('decreasing'));
    const rest = run('--car', 'QTKX 1');
    expect(await rest.ended, rest.output()).toBe(0);
    expect(await history()).toEqual(before);
  });

  test('stops on Ctrl-C, and goes on where it stopped', async () => {
    const before = await history();
    await spoil(yard.point);
    // Another server is at the queue and does nothing: the command looks on.
    await db.pool.query(
      `INSERT INTO worker_leases (name, holder, epoch, expires_at)
       VALUES ('projector', 'another', 1, NOW(3) + INTERVAL 1 HOUR)
       ON DUPLICATE KEY UPDATE holder = 'another', expires_at = VALUES(expires_at)`,
    );
    const { child, output, ended } = run('--site', 'ALDER');
    await vi.waitFor(async () => expect(await states(), output()).toEqual(['waiting']), patience);
    child.kill('SIGINT');
    expect(await ended, output()).toBe(130);
    expect(await states()).toEqual(['stopped']);
    expect(output()).toContain('npm run rebuild -- --resume goes on');
    await db.pool.query("DELETE FROM worker_leases WHERE name = 'projector'");
    await drain();
    expect(await history()).not.toEqual(before);
    const resumed = run('--resume');
    expect(await resumed.ended, resumed.output()).toBe(0);
    expect(await states()).toEqual(['done']);
    expect(await history()).toEqual(before);
  });

  test('runs beside a server that takes reads in and folds them', async () => {
    await spoil(yard.point);
    const projector = createProjector(context);
    projector.start();
    try {
      const { output, ended } = run('--all');
      let code: number | null | undefined;
      void ended.then((value) => (code = value));
      let train = TRAINS;
      await vi.waitFor(async () => {
        await sendTrain(yard.site, BEGIN + (train += 1) * 60_000 + 12 * HOUR_MS);
        expect(code, output()).toBeDefined();
      }, patience);
      expect(code, output()).toBe(0);
    } finally {
      await projector.stop();
    }
    await drain();
    const running = await history();
    for (const table of ['passages', 'passes', 'stays', 'legs', 'last_seen', 'unit_folds']) {
      await db.pool.query(`DELETE FROM ${table}`);
    }
    const again = run('--all');
    expect(await again.ended, again.output()).toBe(0);
    expect(await history()).toEqual(running);
  });

  test.each([
    [['--site', 'NOWHERE'], 'NOWHERE is not the code of a site.'],
    [['--car', 'QTKX 999999'], 'QTKX 999999 is neither registered nor was it ever read.'],
    [['--all', '--site', 'ALDER'], 'Say either --all'],
    [['--from', 'yesterday'], '--from must be a day'],
    [['--colour', 'red'], "Unknown option '--colour'"],
    [['--resume'], 'Nothing that this command began stands stopped.'],
  ])('refuses %j in words', async (parameters, words) => {
    const { output, ended } = run(...parameters);
    expect(await ended).toBe(1);
    expect(output()).toContain(words);
    expect(await states()).toEqual([]);
  });

  test('says how it is used', async () => {
    const { output, ended } = run('--help');
    expect(await ended).toBe(0);
    expect(output()).toContain('npm run rebuild -- --all');
  });
});
