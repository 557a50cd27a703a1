import { mkdtempSync, rmSync } from 'node:fs';
import os from 'node:os';
import path from 'node:path';
import { afterAll } from 'vitest';
import { freePort, startMariadb } from '../../scripts/lib/mariadb.mjs';
import { openDatabase } from '../../server/lib/database.js';
import { migrate } from './migrations.js';

/** A MariaDB that a test may end and start again; its address and its data stay. */
export interface OwnMariadb {
  /** Of its one database, which is migrated. */
  url: string;
  dataDir: string;
  pid(): number;
  start(): Promise<void>;
  /** Ends it by the signal and waits until it has gone. */
  end(signal: 'SIGTERM' | 'SIGKILL'): Promise<void>;
}

/** Starts one, durable as in production; it goes with the file that asked for it. */
export async function useOwnMariadb(
  options: { program?: string; parameters?: string[] } = {},
): Promise<OwnMariadb> {
  const dir = mkdtempSync(path.join(os.tmpdir(), 'fishplate-own-'));
  const settings = {
    dir,
    port: await freePort(),
    database: 'fishplate',
    bufferPoolMb: 64,
    ...options,
  };
  let server = await startMariadb(settings);
  afterAll(async () => {
    await server.stop();
    rmSync(dir, { recursive: true, force: true });
  });
  const database = openDatabase(server.url(), { connections: 1 });
  await migrate(database.sequelize).finally(() => database.close());
  return {
    url: server.url(),
    dataDir: path.join(dir, 'data'),
    pid: () => server.pid as number,
    async start() {
      server = await startMariadb(settings);
    },
    async end(signal) {
      process.kill(server.pid as number, signal);
      await server.stopped;
    },
  };
}
