import { mkdirSync } from 'node:fs';
import { createServer } from 'node:net';
import path from 'node:path';
import { startMariadb } from './mariadb.mjs';
import { readHolder, tryLock } from './processes.mjs';
import { runTool } from './run.mjs';
import { environment, rememberedSecret } from './settings.mjs';
import { Mend } from './steps.mjs';

/** What the database of a data directory is called. */
export const databaseName = 'fishplate';

/** Takes the data directory for this process; what is returned gives it back. */
export function takeDataDir({ dataDir }) {
  mkdirSync(dataDir, { recursive: true });
  const file = path.join(dataDir, 'start.lock');
  const release = tryLock(file);
  if (release) return release;
  throw new Mend(
    `Fishplate already runs on ${dataDir} (process ${Number.parseInt(readHolder(file) ?? '0', 10)}). Stop it, or set FISHPLATE_DATA_DIR and PORT for a second one.`,
  );
}

/** Throws when somebody else listens on the port. */
export function checkPort({ host, port }) {
  return new Promise((resolve, reject) => {
    const probe = createServer();
    probe.once('error', (error) => {
      const why = error.code === 'EADDRINUSE' ? 'another program uses it' : error.message;
      reject(new Mend(`Port ${port} of ${host} cannot be used: ${why}. Set PORT to a free one.`));
    });
    probe.listen(port, host, () => probe.close(() => resolve(`${host}:${port} is free`)));
  });
}

/** The database of the data directory, or the one that DATABASE_URL names. */
export async function openInstanceDatabase({ databaseUrl, dataDir }) {
  if (databaseUrl) {
    return { url: databaseUrl, stopped: new Promise(() => {}), stop: async () => {}, own: false };
  }
  const server = await startMariadb({
    dir: path.join(dataDir, 'mariadb'),
    database: databaseName,
  });
  return { ...server, url: server.url(), own: true };
}

/** Brings the schema up to date; says what has been done. */
export async function migrateDatabase(url) {
  return countOf(await sequelizeCli('db:migrate', url), 'migration');
}

/** Sows the demo's people, places and register; each seeder runs once in the life of a database. */
export async function seedDatabase(url) {
  return countOf(await sequelizeCli('db:seed:all', url), 'seeder');
}

function sequelizeCli(command, url) {
  return runTool('sequelize-cli', [command], { env: environment({ DATABASE_URL: url }) });
}

function countOf(output, noun) {
  const count = output.match(/: (migrated|seeded)\b/g)?.length ?? 0;
  return count === 0 ? 'nothing to do' : `${count} ${noun}${count === 1 ? '' : 's'} run`;
}

/** What the server is told, besides what the environment already says. */
export function serverEnvironment(settings, databaseUrl) {
  return environment({
    NODE_ENV: 'production',
    PORT: String(settings.port),
    HOST: settings.host,
    DATABASE_URL: databaseUrl,
    FISHPLATE_DATA_DIR: settings.dataDir,
    FISHPLATE_DEMO: settings.demo ? '1' : '0',
    SESSION_SECRET: settings.sessionSecret ?? rememberedSecret(settings.dataDir),
  });
}
