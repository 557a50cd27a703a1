import { spawn, type ChildProcess } from 'node:child_process';
import { once } from 'node:events';
import { mkdtempSync, readFileSync, readdirSync, rmSync, statSync } from 'node:fs';
import os from 'node:os';
import path from 'node:path';
import mariadb from 'mariadb';
import { afterAll, describe, expect, it } from 'vitest';
import { freePort } from '../../scripts/lib/mariadb.mjs';
import { waitUntil } from '../../scripts/lib/processes.mjs';

const script = path.resolve(import.meta.dirname, '../../scripts/start.mjs');
const dataDir = mkdtempSync(path.join(os.tmpdir(), 'fishplate-start-'));
const port = await freePort();
const children: ChildProcess[] = [];

interface Started {
  child: ChildProcess;
  output: () => string;
  exited: Promise<unknown[]>;
}

/** Runs a command with the settings of this test's own instance. */
function launch(command: string, parameters: string[], changes: NodeJS.ProcessEnv = {}): Started {
  const child = spawn(command, parameters, {
    env: {
      PATH: '/usr/bin:/bin',
      HOME: os.homedir(),
      PORT: String(port),
      FISHPLATE_DATA_DIR: dataDir,
      FISHPLATE_DEMO: '0',
      ...changes,
    },
    stdio: ['ignore', 'pipe', 'pipe'],
  });
  children.push(child);
  let text = '';
  child.stdout.on('data', (chunk: Buffer) => (text += chunk.toString()));
  child.stderr.on('data', (chunk: Buffer) => (text += chunk.toString()));
  return { child, output: () => text, exited: once(child, 'exit') };
}

async function expectReady({ child, output }: Started): Promise<void> {
  await waitUntil(() => output().includes('ready in') || child.exitCode !== null, 90_000);
  expect(output()).toContain('ready in');
  const answer = await fetch(`http://127.0.0.1:${port}/api/health`);
  expect(answer.status).toBe(200);
}

/** Processes that were started, at whatever remove, for this test's data directory. */
function processesLeft(): string[] {
  return readdirSync('/proc')
    .filter((name) => /^\d+$/.test(name))
    .filter((pid) => {
      try {
        const environment = readFileSync(`/proc/${pid}/environ`, 'utf8');
        return environment.includes(`FISHPLATE_DATA_DIR=${dataDir}`);
      } catch {
        return false;
      }
    });
}

async function expectNothingLeft(): Promise<void> {
  await waitUntil(() => processesLeft().length === 0, 30_000);
  expect(processesLeft()).toEqual([]);
  const log = readFileSync(path.join(dataDir, 'mariadb/mariadb.log'), 'utf8');
  expect(log.trimEnd().split('\n').at(-1)).toMatch(/Shutdown complete/);
}

async function onDatabase<T>(output: string, statement: string): Promise<T> {
  const connection = await mariadb.createConnection({
    host: '127.0.0.1',
    port: Number(/MariaDB on 127\.0\.0\.1:(\d+)/.exec(output)?.[1]),
    user: 'fishplate',
    password: readFileSync(path.join(dataDir, 'mariadb/password'), 'utf8'),
    database: 'fishplate',
  });
  try {
    return await connection.query<T>(statement);
  } finally {
    await connection.end();
  }
}

describe('npm start', { timeout: 240_000 }, () => {
  afterAll(() => {
    for (const child of children) child.kill('SIGKILL');
    rmSync(dataDir, { recursive: true, force: true });
  });

  it('starts from nothing, refuses a second one on its data, and stops cleanly on SIGTERM', async () => {
    const started = launch(process.execPath, [script]);
    await expectReady(started);
    await onDatabase(
      started.output(),
      "INSERT INTO organisations (code, name, kind) VALUES ('KEPT', 'Kept', 'owner')",
    );
    for (const secret of ['session-secret', 'mariadb/password']) {
      expect(statSync(path.join(dataDir, secret)).mode & 0o777).toBe(0o600);
    }

    const second = launch(process.execPath, [script], { PORT: String(await freePort()) });
    expect((await second.exited)[0]).toBe(1);
    expect(second.output()).toContain(`already runs on ${dataDir}`);

    started.child.kill('SIGTERM');
    expect((await started.exited)[0]).toBe(0);
    await expectNothingLeft();
  });

  it('goes on with the same data, and leaves nothing running when its parent is killed', async () => {
    const parent = launch('/bin/sh', ['-c', `"${process.execPath}" "${script}"; true`]);
    await expectReady(parent);
    expect(
      await onDatabase(parent.output(), "SELECT name FROM organisations WHERE code = 'KEPT'"),
    ).toMatchObject([{ name: 'Kept' }]);

    parent.child.kill('SIGKILL');
    await expectNothingLeft();
  });

  it('leaves nothing running when it is itself killed, and names a port that is taken', async () => {
    const started = launch(process.execPath, [script]);
    await expectReady(started);

    const second = launch(process.execPath, [script], { FISHPLATE_DATA_DIR: `${dataDir}/second` });
    expect((await second.exited)[0]).toBe(1);
    expect(second.output()).toContain(`Port ${port} of 127.0.0.1 cannot be used`);

    started.child.kill('SIGKILL');
    await expectNothingLeft();
  });
});
