import { randomBytes } from 'node:crypto';
import { existsSync, mkdirSync, writeFileSync } from 'node:fs';
import path from 'node:path';
import { fileURLToPath } from 'node:url';
import { readHolder } from './processes.mjs';
import { Mend } from './steps.mjs';

/** The top of the tree that these scripts stand in. */
export const root = fileURLToPath(new URL('../..', import.meta.url)).replace(/\/$/, '');

const ours =
  /^(PORT|HOST|DATABASE_URL|SMTP_URL|PUBLIC_URL|SESSION_SECRET|METRICS_TOKEN|FISHPLATE_.*)$/;

/**
 * What the start scripts need to know before the server can check the rest. `.env` fills in what
 * the environment leaves out.
 */
export function readSettings() {
  loadEnvFile();
  const env = process.env;
  const databaseUrl = env.DATABASE_URL || null;
  const port = Number(env.PORT || 4300);
  if (!Number.isInteger(port) || port < 1 || port > 65_535) {
    throw new Mend(`PORT must be a number from 1 to 65535, not "${env.PORT}".`);
  }
  return {
    port,
    host: env.HOST || '127.0.0.1',
    dataDir: path.resolve(root, env.FISHPLATE_DATA_DIR || '.data'),
    demo: (env.FISHPLATE_DEMO || (databaseUrl ? '0' : '1')) === '1',
    databaseUrl,
    sessionSecret: env.SESSION_SECRET || null,
  };
}

function loadEnvFile() {
  const file = path.join(root, '.env');
  if (existsSync(file)) process.loadEnvFile(file);
}

/** The environment as it is, with changes. */
export function environment(changes = {}) {
  return { ...process.env, ...changes };
}

/** The environment without any setting of ours, so that tests run the same everywhere. */
export function cleanEnvironment(changes = {}) {
  const kept = Object.entries(process.env).filter(([name]) => !ours.test(name));
  return { ...Object.fromEntries(kept), ...changes };
}

/** The secret that signs sessions; made once for a data directory and kept there. */
export function rememberedSecret(dataDir) {
  const file = path.join(dataDir, 'session-secret');
  const known = readHolder(file);
  if (known) return known;
  mkdirSync(dataDir, { recursive: true });
  const secret = randomBytes(48).toString('base64url');
  writeFileSync(file, secret, { mode: 0o600 });
  return secret;
}

/** Libraries look at NODE_ENV when they load. */
export function setProduction() {
  process.env.NODE_ENV = 'production';
}
