import { spawn } from 'node:child_process';
import { once } from 'node:events';
import { chmodSync, chownSync, cpSync, mkdirSync, mkdtempSync, rmSync } from 'node:fs';
import os from 'node:os';
import path from 'node:path';
import { beforeEach, expect, it } from 'vitest';
import { freePort } from '../../scripts/lib/mariadb.mjs';
import { hidePrograms, type Sudo } from '../support/hidden-programs.js';

const root = path.resolve(import.meta.dirname, '../..');
const isRoot = process.getuid?.() === 0;
/** No account has it: a plain user of whom the machine knows nothing. */
const STRANGER = 54_321;
const plain = isRoot ? { uid: STRANGER, gid: STRANGER } : {};

const DATABASE = 'mariadb-server-core mariadb-client-core';
const apt = (what: string) => `apt-get -o DPkg::Lock::Timeout=300 ${what}`;
const installing = (packages: string) => [
  apt('update'),
  apt(`install -y --no-install-recommends ${packages}`),
];

let place = '';
beforeEach(() => {
  place = mkdtempSync(path.join(os.tmpdir(), 'fishplate-missing-'));
  chmodSync(place, 0o755);
  cpSync(path.join(root, 'scripts'), path.join(place, 'tree/scripts'), { recursive: true });
  cpSync(path.join(root, 'package.json'), path.join(place, 'tree/package.json'));
  mkdirSync(path.join(place, 'data'));
  if (isRoot) chownSync(path.join(place, 'data'), STRANGER, STRANGER);
  return () => rmSync(place, { recursive: true, force: true });
});

async function run(script: string, who: { uid?: number; gid?: number }, sudo: Sudo = 'absent') {
  const hidden = hidePrograms(place, { sudo });
  const child = spawn(process.execPath, [path.join(place, 'tree/scripts', script)], {
    env: {
      ...hidden.env,
      HOME: '/nonexistent',
      PORT: String(await freePort()),
      FISHPLATE_DATA_DIR: path.join(place, 'data'),
    },
    stdio: ['ignore', 'pipe', 'pipe'],
    ...who,
  });
  let output = '';
  child.stdout.on('data', (chunk: Buffer) => (output += chunk.toString()));
  child.stderr.on('data', (chunk: Buffer) => (output += chunk.toString()));
  const [code] = (await once(child, 'close')) as [number];
  return { code, output, asked: hidden.asked() };
}

const scripts: [script: string, packages: string][] = [
  ['start.mjs', DATABASE],
  ['test.mjs', `${DATABASE} chromium`],
];

for (const [script, packages] of scripts) {
  // Who is not root cannot try what root would do.
  if (isRoot) {
    it(`${script} as root asks apt for ${packages}`, async () => {
      const { code, output, asked } = await run(script, {});
      expect(asked, output).toEqual(installing(packages));
      expect(code).toBe(1);
      expect(output).toContain('apt-get');
    });
  }

  it(`${script} as a plain user with sudo asks apt through it for ${packages}`, async () => {
    const { code, output, asked } = await run(script, plain, 'lets');
    const [update, install] = installing(packages);
    expect(asked, output).toEqual([
      'sudo -n true',
      `sudo -n ${update}`,
      update,
      `sudo -n ${install}`,
      install,
    ]);
    expect(code).toBe(1);
  });

  it.each(['absent', 'asks'] as const)(
    `${script} as a plain user without rights prints one command (sudo %s)`,
    async (sudo) => {
      const { code, output, asked } = await run(script, plain, sudo);
      expect(output).toContain(
        `\n  sudo apt-get update && sudo apt-get install -y --no-install-recommends ${packages}\n`,
      );
      expect(output).not.toMatch(/\bat \S+ \(/);
      expect(asked).toEqual(sudo === 'asks' ? ['sudo -n true'] : []);
      expect(code).toBe(1);
    },
  );
}
