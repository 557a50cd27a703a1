import { mkdtempSync } from 'node:fs';
import os from 'node:os';
import path from 'node:path';
import type { TestProject } from 'vitest/node';
import { startMariadb } from '../../scripts/lib/mariadb.mjs';

declare module 'vitest' {
  export interface ProvidedContext {
    /** Address of the throw-away MariaDB, without a database name, ending in a slash. */
    mariadbUrl: string;
  }
}

type Running = { server: ReturnType<typeof startMariadb>; users: number };
const shared = globalThis as { fishplateTestMariadb?: Running };

/** One throw-away MariaDB for all projects of a run that need one. */
export default async function setup(project: TestProject): Promise<() => Promise<void>> {
  shared.fishplateTestMariadb ??= {
    server: startMariadb({
      dir: mkdtempSync(path.join(os.tmpdir(), 'fishplate-test-')),
      throwAway: true,
    }),
    users: 0,
  };
  const running = shared.fishplateTestMariadb;
  running.users += 1;
  project.provide('mariadbUrl', (await running.server).url(''));
  return async () => {
    running.users -= 1;
    if (running.users === 0) await (await running.server).stop();
  };
}
