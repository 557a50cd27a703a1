import { fork, type ChildProcess } from 'node:child_process';
import { once } from 'node:events';
import path from 'node:path';
import { afterEach } from 'vitest';
import { isBuilt } from '../../scripts/lib/build.mjs';
import { freePort } from '../../scripts/lib/mariadb.mjs';
import { waitUntil } from '../../scripts/lib/processes.mjs';
import { cleanEnvironment } from '../../scripts/lib/settings.mjs';

const root = path.resolve(import.meta.dirname, '../..');

/** What is built starts in half the time; but it must be what stands in the sources. */
const program = isBuilt()
  ? { file: 'dist/server/index.js', execArgv: ['--enable-source-maps'] }
  : { file: 'server/index.ts', execArgv: ['--enable-source-maps', '--import', 'tsx'] };

/** The server as a process of its own, as it stands in the sources. */
export interface ServerProcess {
  pid: number;
  address: string;
  /** Resolves once requests are answered; rejects when it ended before. */
  ready: Promise<void>;
  /** SIGKILL; resolves when it has gone. */
  kill(): Promise<void>;
  /** SIGTERM; the exit code. */
  stop(): Promise<number | null>;
  pause(): void;
  resume(): void;
  isRunning(): boolean;
  /** What it has logged. */
  output(): string;
}

export interface ServerProcessOptions {
  databaseUrl: string;
  /** A free one when left out. */
  port?: number;
  settings?: NodeJS.ProcessEnv;
}

/** Launches servers; those that still run end with the test. */
export function useServerProcesses(): (options: ServerProcessOptions) => Promise<ServerProcess> {
  const launched: ServerProcess[] = [];
  afterEach(async () => {
    for (const server of launched.splice(0)) await server.kill();
  });
  return async (options) => {
    const server = launch(options, options.port ?? (await freePort()));
    launched.push(server);
    return server;
  };
}

function launch({ databaseUrl, settings }: ServerProcessOptions, port: number): ServerProcess {
  const child = fork(path.join(root, program.file), [], {
    cwd: root,
    execArgv: program.execArgv,
    env: cleanEnvironment({
      NODE_ENV: 'production',
      PORT: String(port),
      DATABASE_URL: databaseUrl,
      SESSION_SECRET: 'a secret that only tests know, 0123456789',
      FISHPLATE_DEMO: '0',
      ...settings,
    }),
    stdio: ['ignore', 'pipe', 'pipe', 'ipc'],
  });
  let text = '';
  child.stdout?.on('data', (chunk: Buffer) => (text += chunk.toString()));
  child.stderr?.on('data', (chunk: Buffer) => (text += chunk.toString()));
  const exited = once(child, 'exit');
  const isRunning = () => child.exitCode === null && child.signalCode === null;
  const ready = becomesReady(child, () => text);
  // Whoever kills a server that is still starting does not ask.
  ready.catch(() => undefined);
  return {
    pid: child.pid as number,
    address: `http://127.0.0.1:${port}`,
    ready,
    async kill() {
      child.kill('SIGKILL');
      if (isRunning()) await exited;
    },
    async stop() {
      child.kill('SIGTERM');
      if (isRunning()) await exited;
      return child.exitCode;
    },
    pause: () => child.kill('SIGSTOP'),
    resume: () => child.kill('SIGCONT'),
    isRunning,
    output: () => text,
  };
}

async function becomesReady(child: ChildProcess, output: () => string): Promise<void> {
  let isReady = false;
  child.on('message', (message: { ready?: true }) => (isReady ||= message.ready === true));
  const hasEnded = () => child.exitCode !== null || child.signalCode !== null;
  await waitUntil(() => isReady || hasEnded(), 60_000, 10);
  if (!isReady) throw new Error(`The server did not become ready:\n${output()}`);
}
