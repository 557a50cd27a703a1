import { execFileSync } from 'node:child_process';
import { chmodSync, existsSync, mkdtempSync, rmSync, statSync, writeFileSync } from 'node:fs';
import os from 'node:os';
import path from 'node:path';
import { afterAll, expect, it } from 'vitest';
import { waitUntil } from '../../scripts/lib/processes.mjs';
import { findMariadb } from '../../scripts/lib/programs.mjs';
import { openDatabase } from '../../server/lib/database.js';
import { problemFrom } from '../../server/middleware/problem.js';
import { modelsOf } from '../../server/models/index.js';
import { buildOrganisation } from '../support/factories.js';
import { disorderedCase } from '../support/disordered-ledger.js';
import { expectWholeHistory } from '../support/history-that-stands.js';
import { postsOf, tokensOf, untilNow } from '../support/ledger-posts.js';
import { useOwnMariadb } from '../support/own-mariadb.js';
import { SeededRandom } from '../support/seeded-random.js';
import { sendUntilTaken } from '../support/send-until-taken.js';
import { useServerProcesses } from '../support/server-process.js';
import { storeConfiguration } from '../support/store-configuration.js';

/*
 * A disk that is full without a disk of one's own: all tables stand in one file, and the kernel
 * lets the running MariaDB make no file longer than that (RLIMIT_FSIZE), for root and others alike.
 * By default it would be ended for trying; the shell lets it be refused instead.
 */
const shelf = mkdtempSync(path.join(os.tmpdir(), 'fishplate-full-'));
const program = path.join(shelf, 'mariadbd');
writeFileSync(program, `#!/bin/sh\ntrap '' XFSZ\nexec "${findMariadb()?.server}" "$@"\n`);
chmodSync(shelf, 0o755);
chmodSync(program, 0o755);
const mariadb = await useOwnMariadb({
  program,
  parameters: [
    '--innodb-file-per-table=0',
    '--innodb-autoextend-increment=1',
    // Shorter than the tables' file, so that the limit is that file's alone.
    '--innodb-log-file-size=4M',
  ],
});
const db = openDatabase(mariadb.url, { connections: 3 });
afterAll(async () => {
  await db.close();
  rmSync(shelf, { recursive: true });
});
const launch = useServerProcesses();
const isLong = import.meta.env.TEST_MODE === 'long';
const READS = isLong ? 4_000 : 1_000;
const ROUNDS = isLong ? 4 : 1;
const DISK_FULL = 1114;
const MEGABYTE = 1_048_576;

function limitFiles(bytes: number | 'unlimited'): void {
  execFileSync('prlimit', ['--pid', String(mariadb.pid()), `--fsize=${bytes}:unlimited`]);
}

function isAlive(): boolean {
  return existsSync(`/proc/${mariadb.pid()}`);
}

/** MariaDB itself may fall over a full disk under load; then it is started again, as people would. */
async function makeRoom(): Promise<void> {
  if (isAlive()) limitFiles('unlimited');
  else await mariadb.start();
}

/** Lets the tables' file grow no further, and uses up what is free in it. */
async function fillDisk(): Promise<void> {
  // It may grow between our asking and our limiting; to write below its end must stay possible.
  limitFiles(statSync(path.join(mariadb.dataDir, 'ibdata1')).size + 4 * MEGABYTE);
  await db.pool.query('CREATE TABLE IF NOT EXISTS ballast (fill LONGBLOB NOT NULL)');
  for (const bytes of [200_000, 7_000]) {
    let error: { errno?: number } | null = null;
    while (error === null) {
      error = await db.pool
        .query('INSERT INTO ballast (fill) VALUES (REPEAT("x", ?))', [bytes])
        .then(() => null)
        .catch((failure: { errno?: number }) => failure);
    }
    if (error.errno === DISK_FULL) continue;
    expect(await waitUntil(() => !isAlive(), 30_000), `an error other than ${DISK_FULL}`).toBe(
      true,
    );
    return;
  }
}

it(
  'keeps what was acknowledged while the disk is full, refuses the rest with 503, and takes it later',
  { timeout: isLong ? 900_000 : 300_000 },
  async () => {
    const random = new SeededRandom(701);
    const { configuration, ledger: drawn } = disorderedCase(701, READS);
    const ledger = untilNow(drawn);
    await storeConfiguration(db, configuration);
    const tokens = await tokensOf(db, configuration);
    const posts = postsOf(ledger, configuration, random);
    const server = await launch({ databaseUrl: mariadb.url });
    await server.ready;
    const sending = sendUntilTaken(posts, tokens, () => server.address);
    for (let round = 1; round <= ROUNDS; round += 1) {
      const least = (posts.length * round) / (ROUNDS + 2);
      await waitUntil(() => sending.answered >= least, 60_000, 5);
      const refusedBefore = sending.refusals.length;
      await fillDisk();
      await waitUntil(() => sending.refusals.length > refusedBefore + 6, 60_000);
      await makeRoom();
    }
    await sending.done;
    expect(new Set(sending.refusals.map(({ status }) => status))).toEqual(new Set([503]));
    for (const { type, retryAfter } of sending.refusals) {
      expect(type).toContain('application/problem+json');
      expect(Number(retryAfter)).toBeGreaterThan(0);
    }
    expect(server.isRunning()).toBe(true);
    await expectWholeHistory(db, configuration, ledger);
  },
);

it('is 503 too for what people change', async () => {
  await fillDisk();
  const { Organisation } = modelsOf(db.sequelize);
  const fill = (code: number) =>
    Organisation.create({ code: `FULL${code}`, name: 'x'.repeat(100), kind: 'carOwner' });
  let error: unknown = null;
  for (let code = 1; error === null; code += 1) {
    error = await fill(code)
      .then(() => null)
      .catch((failure: unknown) => failure);
  }
  expect(problemFrom(error).status).toBe(503);
  await makeRoom();
  await buildOrganisation(db);
});
