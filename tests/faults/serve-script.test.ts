import { spawn } from 'node:child_process';
import { once } from 'node:events';
import path from 'node:path';
import { describe, expect, it } from 'vitest';
import { freePort } from '../../scripts/lib/mariadb.mjs';
import { waitUntil } from '../../scripts/lib/processes.mjs';
import { useEmptyDatabase } from '../support/database.js';

const script = path.resolve(import.meta.dirname, '../../scripts/serve.mjs');
const databaseUrl = await useEmptyDatabase('fishplate_serve');

function serve(settings: NodeJS.ProcessEnv) {
  const child = spawn(process.execPath, [script], {
    env: { PATH: '/usr/bin:/bin', DATABASE_URL: '', SESSION_SECRET: '', ...settings },
    stdio: ['ignore', 'pipe', 'pipe'],
  });
  let text = '';
  child.stdout.on('data', (chunk: Buffer) => (text += chunk.toString()));
  child.stderr.on('data', (chunk: Buffer) => (text += chunk.toString()));
  return { child, output: () => text, exited: once(child, 'exit') };
}

describe('npm run serve', { timeout: 90_000 }, () => {
  it('refuses to start without a database and a secret, and names both', async () => {
    const { output, exited } = serve({});
    expect((await exited)[0]).toBe(1);
    expect(output()).toContain('DATABASE_URL and SESSION_SECRET must be set');
  });

  it('refuses a secret that is short, without repeating it', async () => {
    const { output, exited } = serve({ DATABASE_URL: databaseUrl, SESSION_SECRET: 'short one' });
    expect((await exited)[0]).toBe(1);
    expect(output()).toContain('SESSION_SECRET must have 32 characters at least');
    expect(output()).not.toContain('short one');
  });

  it('brings the schema up, answers, and ends cleanly on SIGTERM', async () => {
    const port = await freePort();
    const { child, output, exited } = serve({
      PORT: String(port),
      DATABASE_URL: databaseUrl,
      SESSION_SECRET: 'a secret of a production, 0123456789',
    });
    const isWell = () =>
      fetch(`http://127.0.0.1:${port}/api/health`).then(
        (answer) => answer.status === 200,
        () => child.exitCode !== null,
      );
    await waitUntil(isWell, 60_000);
    expect(child.exitCode, output()).toBeNull();
    child.kill('SIGTERM');
    expect((await exited)[0]).toBe(0);
  });
});
