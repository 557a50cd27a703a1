import { fork } from 'node:child_process';
import { closeSync, openSync, readFileSync } from 'node:fs';
import { get } from 'node:http';
import path from 'node:path';
import { identityOf, stopProcess, waitUntil } from './processes.mjs';
import { root } from './settings.mjs';

/**
 * Starts the built server. It ends when the channel to us closes, however we end. Its log goes
 * to a file; what a person should see it sends over the channel:
 * `{ progress: { name, done, total, unit } }`, `{ note: 'text' }` and `{ ready: true }`.
 */
export function startServer({ env, logFile }) {
  const log = openSync(logFile, 'a');
  const child = fork(path.join(root, 'dist/server/index.js'), [], {
    cwd: root,
    env,
    execArgv: ['--enable-source-maps'],
    // In a group of its own: Ctrl-C reaches the whole terminal group, and we decide on the order.
    detached: true,
    stdio: ['ignore', log, log, 'ipc'],
  });
  closeSync(log);
  const identity = identityOf(child.pid);
  const exited = new Promise((resolve) =>
    child.once('exit', (code, signal) => resolve(code ?? signal)),
  );
  return {
    pid: child.pid,
    exited,
    onMessage: (listener) => child.on('message', listener),
    stop: async () => {
      if (identity) await stopProcess(identity, 20_000);
      await exited;
    },
    lastLines: (count = 20) => readFileSync(logFile, 'utf8').trimEnd().split('\n').slice(-count),
  };
}

/** Resolves when the server says of itself that it is well. */
export async function waitForHealth({ host, port }, timeoutMs = 60_000) {
  const asked = host === '0.0.0.0' || host === '::' ? '127.0.0.1' : host;
  const isWell = await waitUntil(() => answers200(asked, port), timeoutMs, 100);
  if (!isWell) throw new Error(`/api/health did not answer 200 within ${timeoutMs / 1000} s.`);
}

function answers200(host, port) {
  return new Promise((resolve) => {
    const request = get({ host, port, path: '/api/health', timeout: 5_000 }, (response) => {
      response.resume();
      resolve(response.statusCode === 200);
    });
    request.once('timeout', () => request.destroy());
    request.once('error', () => resolve(false));
  });
}
