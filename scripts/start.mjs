import path from 'node:path';
import { ensureBuilt } from './lib/build.mjs';
import {
  checkPort,
  migrateDatabase,
  openInstanceDatabase,
  seedDatabase,
  serverEnvironment,
  takeDataDir,
} from './lib/instance.mjs';
import { ensureModules } from './lib/modules.mjs';
import { checkNode, ensurePackages } from './lib/packages.mjs';
import { startServer, waitForHealth } from './lib/server-process.mjs';
import { readSettings } from './lib/settings.mjs';
import { manageStopping } from './lib/stopping.mjs';
import { print, seconds, step } from './lib/steps.mjs';

const demoPeople = [
  ['owner@fishplate.example', 'owns cars'],
  ['boxes@fishplate.example', 'owns containers'],
  ['dispatcher@fishplate.example', 'answers for car flow'],
  ['clerk@fishplate.example', 'keeps a yard'],
  ['admin@fishplate.example', 'keeps the portal'],
];

const begun = Date.now();
const stopping = manageStopping();
await stopping.guard(main);

async function main() {
  await step('Node', () => checkNode());
  const settings = readSettings();
  stopping.onStop(takeDataDir(settings));
  await step('Port', () => checkPort(settings));
  await step('Debian packages', () => ensurePackages({ database: !settings.databaseUrl }));
  await step('Node packages', ensureModules);
  await step('Client and server', ensureBuilt);
  const database = await openDatabase(settings);
  await step('Schema', () => migrateDatabase(database.url));
  if (settings.demo) await step('Demo people and places', () => seedDatabase(database.url));
  await runServer(settings, database);
  announce(settings);
}

async function openDatabase(settings) {
  let database;
  await step('Database', async () => {
    database = await openInstanceDatabase(settings);
    return database.own ? `MariaDB on 127.0.0.1:${database.port}` : 'the one DATABASE_URL names';
  });
  stopping.onStop(database.stop);
  stopping.failWhen(database.stopped, () => 'The database stopped by itself.');
  return database;
}

async function runServer(settings, database) {
  const env = serverEnvironment(settings, database.url);
  const logFile = path.join(settings.dataDir, 'server.log');
  const server = startServer({ env, logFile });
  stopping.onStop(server.stop);
  stopping.failWhen(server.exited, () =>
    ['The server stopped by itself. Its log ends:', ...server.lastLines()].join('\n'),
  );
  await step('Server', (bar) => {
    server.onMessage(({ progress, note }) => {
      if (progress) bar(progress);
      if (note) print(note);
    });
    return new Promise((resolve, reject) => {
      server.onMessage(({ ready }) => {
        if (ready) waitForHealth(settings).then(() => resolve('answers'), reject);
      });
      void server.exited.then(() => reject(stopping.reason()));
    });
  });
}

function announce({ host, port, demo, dataDir }) {
  print(`\nready in ${seconds(begun)} s\n`);
  print(`  http://${host}:${port}`);
  if (demo) {
    print('\n  Sign in with the password fishplate-demo as');
    for (const [email, what] of demoPeople) print(`    ${email.padEnd(30)} ${what}`);
  }
  print(`\n  Data and log are in ${dataDir}. Ctrl-C stops everything.`);
}
