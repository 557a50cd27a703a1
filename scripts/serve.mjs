import { existsSync } from 'node:fs';
import path from 'node:path';
import { migrateDatabase } from './lib/instance.mjs';
import { checkNode } from './lib/packages.mjs';
import { watchParents } from './lib/processes.mjs';
import { readSettings, root, setProduction } from './lib/settings.mjs';
import { complain, Mend, print } from './lib/steps.mjs';

const program = path.join(root, 'dist/server/index.js');

try {
  checkNode();
  const { databaseUrl, sessionSecret } = readSettings();
  const missing = [
    ...(databaseUrl ? [] : ['DATABASE_URL']),
    ...(sessionSecret ? [] : ['SESSION_SECRET']),
  ];
  if (missing.length > 0) {
    throw new Mend(`${missing.join(' and ')} must be set for production. See .env.example.`);
  }
  if (!existsSync(program)) throw new Mend('Nothing is built yet: run npm run build first.');
  print(`Schema: ${await migrateDatabase(databaseUrl)}`);
  watchParents(() => process.kill(process.pid, 'SIGTERM'));
  setProduction();
  await import(program);
} catch (error) {
  complain(error);
  process.exit(1);
}
