import { createHash } from 'node:crypto';
import { existsSync, mkdirSync, readFileSync, readdirSync, rmSync, writeFileSync } from 'node:fs';
import path from 'node:path';
import { lock, readHolder } from './processes.mjs';
import { runTool } from './run.mjs';
import { environment, root } from './settings.mjs';

const sources = [
  'index.html',
  'package-lock.json',
  'public',
  'server',
  'src',
  'tailwind.config.ts',
  'tsconfig.json',
  'vite.config.ts',
];
const dist = path.join(root, 'dist');
const stamp = path.join(dist, 'built-from');

/** Builds client and server into dist/, unless they were built from these very sources. */
export async function ensureBuilt() {
  mkdirSync(dist, { recursive: true });
  const release = await lock(path.join(dist, 'build.lock'));
  try {
    const wanted = fingerprint();
    if (readHolder(stamp) === wanted) return 'unchanged';
    rmSync(stamp, { force: true });
    const env = environment({ NODE_ENV: 'production' });
    await runTool('vite', ['build', '--logLevel', 'warn'], { env });
    await runTool('vite', ['build', '--logLevel', 'warn', '--ssr'], { env });
    writeFileSync(stamp, wanted);
    return 'built';
  } finally {
    release();
  }
}

/** True when dist/ was built from the sources as they are now. */
export function isBuilt() {
  return readHolder(stamp) === fingerprint();
}

function fingerprint() {
  const hash = createHash('sha256').update(process.version);
  for (const source of sources) addTo(hash, source);
  return hash.digest('hex');
}

function addTo(hash, file) {
  const full = path.join(root, file);
  if (!existsSync(full)) return;
  const entries = readEntries(full);
  if (entries) for (const entry of entries) addTo(hash, path.join(file, entry));
  else hash.update(`${file}\0`).update(readFileSync(full)).update('\0');
}

function readEntries(full) {
  try {
    return readdirSync(full).sort();
  } catch (error) {
    if (error.code === 'ENOTDIR') return null;
    throw error;
  }
}
