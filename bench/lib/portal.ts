import { fork, type ChildProcess } from 'node:child_process';
import { createHash, randomBytes } from 'node:crypto';
import { once } from 'node:events';
import { mkdtempSync, rmSync } from 'node:fs';
import { createServer, type AddressInfo } from 'node:net';
import os from 'node:os';
import path from 'node:path';
import { startMariadb } from '../../scripts/lib/mariadb.mjs';
import { openDatabase, type Database } from '../../server/lib/database.js';
import { modelsOf } from '../../server/models/index.js';
import type { Site } from '../../server/models/site.js';
import { buildBulkFleet } from '../../tests/support/bulk-fleet.js';
import {
  buildAntenna,
  buildOrganisation,
  buildPerson,
  buildReadPoint,
  buildSite,
} from '../../tests/support/factories.js';
import { migrate } from '../../tests/support/migrations.js';

/** A reader with four antennas at the lead of a yard. */
export interface Sender {
  siteId: number;
  token: string;
}

/** A whole portal, started like any other, on a throw-away durable database. */
export interface Portal {
  db: Database;
  databaseUrl: string;
  port: number;
  senders: Sender[];
  /** Who owns all cars; signs in with PASSWORD of the tests' factories. */
  email: string;
  close(): Promise<void>;
}

/** `sites` yards, and so many registered cars `QTKX 1` and on of one owner. */
export async function startPortal(options: { sites: number; cars: number }): Promise<Portal> {
  const dir = mkdtempSync(path.join(os.tmpdir(), 'fishplate-bench-'));
  const mariadb = await startMariadb({ dir, throwAway: true, durable: true, database: 'bench' });
  const db = openDatabase(mariadb.url());
  let server: ChildProcess | undefined;
  const dataDir = mkdtempSync(path.join(os.tmpdir(), 'fishplate-bench-data-'));
  const close = async () => {
    if (server?.exitCode === null) {
      server.kill('SIGTERM');
      await once(server, 'exit');
    }
    await db.close();
    await mariadb.stop();
    rmSync(dataDir, { recursive: true, force: true });
  };
  try {
    await migrate(db.sequelize);
    const { senders, email } = await furnish(db, options);
    const port = await freePort();
    server = fork(path.join(import.meta.dirname, '../../server/index.ts'), {
      execArgv: ['--import', 'tsx'],
      stdio: ['ignore', 'ignore', 'inherit', 'ipc'],
      env: {
        PATH: '',
        PORT: String(port),
        NODE_ENV: 'production',
        FISHPLATE_DEMO: '0',
        FISHPLATE_DATA_DIR: dataDir,
        DATABASE_URL: mariadb.url(),
        SESSION_SECRET: randomBytes(32).toString('hex'),
      },
    });
    await Promise.race([ready(server), once(server, 'exit').then(refuse)]);
    return { db, databaseUrl: mariadb.url(), port, senders, email, close };
  } catch (error) {
    await close();
    throw error;
  }
}

async function furnish(db: Database, options: { sites: number; cars: number }) {
  const owner = await buildOrganisation(db);
  const { email } = await buildPerson(db, { roles: ['owner'], organisation: owner });
  const sites: Site[] = [];
  const senders: Sender[] = [];
  for (let count = 0; count < options.sites; count += 1) {
    const site = await buildSite(db);
    sites.push(site);
    const readPoint = await buildReadPoint(db, { site });
    for (const offsetM of [-3, 3]) {
      for (const side of ['left', 'right'] as const) {
        await buildAntenna(db, { readPoint, offsetM, side });
      }
    }
    const token = randomBytes(32).toString('base64url');
    const tokenHash = createHash('sha256').update(token).digest();
    const row = { siteId: site.id, tokenHash, createdAt: new Date(), revokedAt: null };
    await modelsOf(db.sequelize).ReaderToken.create(row);
    senders.push({ siteId: site.id, token });
  }
  await buildBulkFleet(db, { count: options.cars, owner, sites, now: new Date() });
  return { senders, email };
}

async function ready(server: ChildProcess): Promise<void> {
  for (;;) {
    const [message] = (await once(server, 'message')) as [{ ready?: true }];
    if (message.ready) return;
  }
}

function refuse(): never {
  throw new Error('The server ended before it was ready.');
}

async function freePort(): Promise<number> {
  const server = createServer().listen(0, '127.0.0.1');
  await once(server, 'listening');
  const { port } = server.address() as AddressInfo;
  server.close();
  await once(server, 'close');
  return port;
}
