import { spawn } from 'node:child_process';
import { once } from 'node:events';
import {
  accessSync,
  chmodSync,
  chownSync,
  cpSync,
  mkdirSync,
  mkdtempSync,
  readFileSync,
  readdirSync,
  rmSync,
  statSync,
  symlinkSync,
} from 'node:fs';
import os from 'node:os';
import path from 'node:path';
import { afterAll, expect, it } from 'vitest';
import { freePort } from '../../scripts/lib/mariadb.mjs';
import { waitUntil } from '../../scripts/lib/processes.mjs';
import { findMariadb, findProgram } from '../../scripts/lib/programs.mjs';
import { hidePrograms } from '../support/hidden-programs.js';

const root = path.resolve(import.meta.dirname, '../..');
const isLong = import.meta.env.TEST_MODE === 'long';
/** No account has it: a plain user of whom the machine knows nothing. Who is plain, stays so. */
const uid = process.getuid?.() === 0 ? 54_321 : (process.getuid?.() ?? 0);

const place = mkdtempSync(path.join(os.tmpdir(), 'fishplate-stranger-'));
afterAll(() => {
  chmodSync(path.join(place, 'tree/node_modules'), 0o755);
  rmSync(place, { recursive: true, force: true });
});

/** A fresh copy of the tree; what is built comes along, unless the stranger is to build it. */
function copyTree(): string {
  const tree = path.join(place, 'tree');
  const left = ['node_modules', '.git', '.data', '.env', 'tests', 'docs', 'bench'];
  cpSync(root, tree, {
    recursive: true,
    filter: (source) => {
      const name = path.relative(root, source);
      if (name === 'dist') return !isLong;
      return !left.includes(name) && name !== 'dist/running' && !name.endsWith('.log');
    },
  });
  chmodSync(place, 0o755);
  give(tree);
  bringPackages(path.join(tree, 'node_modules'));
  return tree;
}

/** The packages stay root's, and nobody has looked through them or built with them yet. */
function bringPackages(directory: string): void {
  const own = path.join(root, 'node_modules');
  mkdirSync(directory);
  const kept = ['.bin', '.package-lock.json'];
  const names = readdirSync(own).filter((name) => !name.startsWith('.') || kept.includes(name));
  for (const name of names) {
    const [from, to] = [path.join(own, name), path.join(directory, name)];
    if (isReadableByAll(root)) symlinkSync(from, to);
    else cpSync(from, to, { recursive: true, verbatimSymlinks: true });
  }
  if (process.getuid?.() === 0) chmodSync(directory, 0o755);
  else chmodSync(directory, 0o555);
}

/** Directories on the way down that only their owner may enter would shut the stranger out. */
function isReadableByAll(directory: string): boolean {
  if ((statSync(directory).mode & 0o005) !== 0o005) return false;
  return directory === '/' || isReadableByAll(path.dirname(directory));
}

function give(file: string): void {
  if (process.getuid?.() !== 0) return;
  for (const entry of readdirSync(file, { withFileTypes: true })) {
    const inner = path.join(file, entry.name);
    if (entry.isDirectory()) give(inner);
    else if (!entry.isSymbolicLink()) chownSync(inner, uid, uid);
  }
  chownSync(file, uid, uid);
}

it(
  'starts for a user without account, home and MariaDB, once sudo has let apt bring it',
  { timeout: 300_000 },
  async () => {
    const programs = findMariadb();
    const links = [programs?.server, programs?.installer, findProgram('my_print_defaults')];
    const install = links.map((file) => `/bin/ln -s '${file}' .`).join(' && ');
    const hidden = hidePrograms(place, { sudo: 'lets', install });
    const tree = copyTree();
    const port = await freePort();
    const child = spawn(process.execPath, [path.join(tree, 'scripts/start.mjs')], {
      cwd: tree,
      uid,
      gid: uid,
      env: {
        ...hidden.env,
        PATH: `${hidden.env.PATH}:/usr/bin:/bin`,
        HOME: '/nonexistent',
        PORT: String(port),
        FISHPLATE_DEMO: '0',
      },
      stdio: ['ignore', 'pipe', 'pipe'],
    });
    let output = '';
    child.stdout.on('data', (chunk: Buffer) => (output += chunk.toString()));
    child.stderr.on('data', (chunk: Buffer) => (output += chunk.toString()));
    const exited = once(child, 'exit');
    await waitUntil(() => output.includes('ready in') || child.exitCode !== null, 240_000);
    expect(output).toContain('installed mariadb-server-core, mariadb-client-core');
    expect(output).toContain('ready in');
    expect(hidden.asked().filter((line) => line.includes('install'))).toHaveLength(2);
    expect((await fetch(`http://127.0.0.1:${port}/api/health`)).status).toBe(200);

    const pidFile = path.join(tree, '.data/mariadb/mariadb.pid');
    const [pid] = readFileSync(pidFile, 'utf8').split(':');
    expect(statSync(`/proc/${pid}`).uid).toBe(uid);
    const command = readFileSync(`/proc/${pid}/cmdline`, 'utf8');
    expect(command).toContain(hidden.env['FISHPLATE_PROGRAMS']);
    expect(command).toContain(`--tmpdir=${path.join(tree, '.data/mariadb/tmp')}`);
    for (const file of ['.data/mariadb/data', '.data/session-secret', '.data/server.log']) {
      expect(statSync(path.join(tree, file)).uid, file).toBe(uid);
    }

    child.kill('SIGTERM');
    expect((await exited)[0], output).toBe(0);
    expect(() => accessSync(`/proc/${pid}`)).toThrow();
  },
);
