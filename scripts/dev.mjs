import { spawn } from 'node:child_process';
import path from 'node:path';
import {
  checkPort,
  migrateDatabase,
  openInstanceDatabase,
  seedDatabase,
  serverEnvironment,
  takeDataDir,
} from './lib/instance.mjs';
import { freePort } from './lib/mariadb.mjs';
import { ensureModules } from './lib/modules.mjs';
import { checkNode, ensurePackages } from './lib/packages.mjs';
import { readSettings, root } from './lib/settings.mjs';
import { manageStopping } from './lib/stopping.mjs';
import { print, step } from './lib/steps.mjs';

const stopping = manageStopping();
await stopping.guard(main);

/** The client by Vite on PORT, the server by tsx on a port behind it; both reload on change. */
async function main() {
  checkNode();
  const settings = readSettings();
  stopping.onStop(takeDataDir(settings));
  await checkPort(settings);
  await step('Debian packages', () => ensurePackages({ database: !settings.databaseUrl }));
  await step('Node packages', ensureModules);
  const database = await openInstanceDatabase(settings);
  stopping.onStop(database.stop);
  await step('Schema', () => migrateDatabase(database.url));
  if (settings.demo) await step('Demo people and places', () => seedDatabase(database.url));
  const serverPort = await freePort();
  startServer(settings, database, serverPort);
  await startClient(settings, serverPort);
  print(`\nhttp://${settings.host}:${settings.port} (reloads on change)\n`);
}

function startServer(settings, database, port) {
  const publicUrl = `http://${settings.host}:${settings.port}`;
  const child = spawn(
    process.execPath,
    [path.join(root, 'node_modules/.bin/tsx'), 'watch', '--clear-screen=false', 'server/index.ts'],
    {
      cwd: root,
      env: {
        PUBLIC_URL: publicUrl,
        ...serverEnvironment({ ...settings, port }, database.url),
        NODE_ENV: 'development',
      },
      stdio: ['ignore', 'inherit', 'inherit'],
      detached: true,
    },
  );
  const exited = new Promise((resolve) => child.once('exit', resolve));
  stopping.failWhen(exited, () => 'The server stopped by itself.');
  stopping.onStop(async () => {
    child.kill('SIGTERM');
    await exited;
  });
}

async function startClient({ host, port }, serverPort) {
  const { createServer } = await import('vite');
  const target = `http://127.0.0.1:${serverPort}`;
  const client = await createServer({
    root,
    server: { host, port, strictPort: true, proxy: { '/api': { target }, '/metrics': { target } } },
  });
  await client.listen();
  stopping.onStop(() => client.close());
}
