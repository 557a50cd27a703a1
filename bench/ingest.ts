import { fork, type ChildProcess } from 'node:child_process';
import { createHash, randomBytes } from 'node:crypto';
import { once } from 'node:events';
import { mkdtempSync } from 'node:fs';
import http from 'node:http';
import os from 'node:os';
import path from 'node:path';
import { pathToFileURL } from 'node:url';
import { startMariadb } from '../scripts/lib/mariadb.mjs';
import { openDatabase, type Database } from '../server/lib/database.js';
import { modelsOf } from '../server/models/index.js';
import { buildAntenna, buildReadPoint, buildSite } from '../tests/support/factories.js';
import { migrate } from '../tests/support/migrations.js';
import { trainRequests, type BenchRead } from './lib/ingest-traffic.js';
import { postReads } from './lib/post-reads.js';

const WRITERS = 4;
const READS_PER_REQUEST = 500;
const REQUESTS_PER_WRITER = 100;
const RUNS = 3;
const READS = WRITERS * REQUESTS_PER_WRITER * READS_PER_REQUEST;

interface Sender {
  siteId: number;
  token: string;
}

/**
 * Acknowledged reads a second over HTTP against bare multi-row inserts into the same table, on
 * the same durable database, in turns and after one turn of each that does not count; prints the best and the spread of each, and the ratios.
 * The bare insert once binds values made beforehand, as any client would, and once sends
 * statements that are ready as text: the client then costs next to nothing.
 */
export default async function bench(): Promise<void> {
  const mariadb = await startMariadb({
    dir: mkdtempSync(path.join(os.tmpdir(), 'fishplate-bench-')),
    throwAway: true,
    durable: true,
    database: 'bench',
  });
  const db = openDatabase(mariadb.url());
  let server: ChildProcess | undefined;
  try {
    await migrate(db.sequelize);
    const senders = await buildSenders(db);
    const started = await startServer(mariadb.url());
    server = started.server;
    await measure(db, senders, started.port);
  } finally {
    server?.disconnect();
    await db.close();
    await mariadb.stop();
  }
}

async function measure(db: Database, senders: Sender[], port: number): Promise<void> {
  const ways = [
    { name: 'bare insert, values bound ', run: () => insertBare(db, senders, false) },
    { name: 'bare insert, ready as text', run: () => insertBare(db, senders, true) },
    { name: 'acknowledged over HTTP    ', run: () => sendAll(senders, port) },
  ];
  const rates = ways.map((): number[] => []);
  // Neither server starts cold: the first round is not counted.
  for (let run = 0; run <= RUNS; run += 1) {
    for (const [way, { run: measured }] of ways.entries()) {
      await empty(db);
      const rate = Math.round(await measured());
      if (run > 0) rates[way]?.push(rate);
      await requireStored(db);
    }
  }
  console.log(`ingest: ${WRITERS} writers, ${READS_PER_REQUEST} reads a request, ${READS} a run`);
  const best = rates.map((list) => Math.max(...list));
  for (const [way, { name }] of ways.entries()) {
    console.log(`  ${name}  ${best[way]} reads/s  (${rates[way]?.join(', ')})`);
  }
  const [bound = 0, text = 0, door = 0] = best;
  const ratios = [door / bound, door / text].map((ratio) => ratio.toFixed(2));
  console.log(`  ratio ${ratios[0]} to bound values (aim 0.7), ${ratios[1]} to ready text`);
}

async function buildSenders(db: Database): Promise<Sender[]> {
  const senders: Sender[] = [];
  for (let writer = 0; writer < WRITERS; writer += 1) {
    const site = await buildSite(db);
    const readPoint = await buildReadPoint(db, { site });
    for (const number of [1, 2, 3, 4]) await buildAntenna(db, { readPoint, number });
    const token = randomBytes(32).toString('base64url');
    const tokenHash = createHash('sha256').update(token).digest();
    const createdAt = new Date();
    await modelsOf(db.sequelize).ReaderToken.create({
      siteId: site.id,
      tokenHash,
      createdAt,
      revokedAt: null,
    });
    senders.push({ siteId: site.id, token });
  }
  return senders;
}

async function startServer(databaseUrl: string): Promise<{ server: ChildProcess; port: number }> {
  const server = fork(path.join(import.meta.dirname, 'lib/ingest-server.ts'), {
    execArgv: ['--import', 'tsx'],
    env: { PATH: '', DATABASE_URL: databaseUrl, SESSION_SECRET: randomBytes(32).toString('hex') },
  });
  const [{ port }] = (await once(server, 'message')) as [{ port: number }];
  return { server, port };
}

const empty = (db: Database) =>
  Promise.all(['`reads`', 'work', 'held'].map((table) => db.pool.query(`TRUNCATE ${table}`)));

async function requireStored(db: Database): Promise<void> {
  const [row] = await db.pool.query<{ n: number }[]>('SELECT COUNT(*) AS n FROM `reads`');
  if (row?.n !== READS) throw new Error(`${row?.n} reads are stored, not ${READS}.`);
}

const requestsOf = (site: number): BenchRead[][] =>
  trainRequests({
    requests: REQUESTS_PER_WRITER,
    readsPerRequest: READS_PER_REQUEST,
    start: new Date(Date.now() - 3_600_000),
    site,
  });

type Row = [number, number, number, number, string, Date, number, number, null, number, Date];

/** The rows of one request, in order of the unique key. */
function rowsOf(reads: BenchRead[], batchId: number, siteId: number, receivedAt: Date): Row[] {
  return reads
    .map(({ antenna, tag, readAt, rssi, count }, seq): Row => {
      return [batchId, seq, siteId, antenna, tag, readAt, rssi, count, null, 1, receivedAt];
    })
    .sort((a, b) => a[3] - b[3] || a[5].getTime() - b[5].getTime());
}

/** One statement and commit for each request; everything but the sending is done before. */
async function insertBare(db: Database, senders: Sender[], asText: boolean): Promise<number> {
  const receivedAt = new Date();
  const head = `INSERT INTO \`reads\` (batch_id, seq, site_id, antenna_no, tag, read_at, rssi,
    read_count, hold_code, config_version, received_at) VALUES `;
  const placeholders = Array<string>(READS_PER_REQUEST).fill(`(${Array(11).fill('?').join()})`);
  const statements = senders.map(({ siteId }, writer) =>
    requestsOf(writer).map((reads, request) => {
      const rows = rowsOf(reads, writer * REQUESTS_PER_WRITER + request + 1, siteId, receivedAt);
      return asText
        ? { sql: head + rows.map((row) => `(${row.map(literal).join()})`).join() }
        : { sql: head + placeholders.join(), values: rows.flat() };
    }),
  );
  return rateOf(
    statements.map((own) => async () => {
      const connection = await db.pool.getConnection();
      for (const { sql, values } of own) await connection.query(sql, values);
      await connection.release();
    }),
  );
}

function literal(value: Row[number]): string {
  if (value instanceof Date) return `'${value.toISOString().slice(0, 23)}'`;
  return typeof value === 'string' ? `'${value}'` : String(value);
}

async function sendAll(senders: Sender[], port: number): Promise<number> {
  const agent = new http.Agent({ keepAlive: true, maxSockets: WRITERS });
  const bodies = senders.map((_sender, writer) =>
    requestsOf(writer).map((reads) => Buffer.from(JSON.stringify({ reads }))),
  );
  const rate = await rateOf(
    senders.map(({ token }, writer) => async () => {
      for (const body of bodies[writer] ?? []) {
        const answer = await postReads({ agent, port, token, body });
        if (
          answer !==
          `{"accepted":${READS_PER_REQUEST},"duplicates":0,"held":0,"rejected":0,"problems":[]}`
        )
          throw new Error(`Not all were accepted: ${answer.slice(0, 300)}`);
      }
    }),
  );
  agent.destroy();
  return rate;
}

/** Reads a second while all writers go at once. */
async function rateOf(writers: (() => Promise<void>)[]): Promise<number> {
  const begin = performance.now();
  await Promise.all(writers.map((write) => write()));
  return (READS * 1_000) / (performance.now() - begin);
}

if (import.meta.url === pathToFileURL(process.argv[1] ?? '').href) await bench();
