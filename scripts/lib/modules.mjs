import { createHash } from 'node:crypto';
import { existsSync, mkdirSync, readFileSync, readdirSync, rmSync, writeFileSync } from 'node:fs';
import path from 'node:path';
import { identityOf, isAlive, lock, readHolder } from './processes.mjs';
import { run } from './run.mjs';
import { environment, root } from './settings.mjs';
import { Mend } from './steps.mjs';

const lockFile = path.join(root, 'package-lock.json');
const stamp = path.join(root, 'node_modules/.fishplate-packages');
const place = path.join(root, 'dist');
const usersPlace = path.join(place, 'running');

/**
 * Makes node_modules what the lock file says. Only one process does so at a time, and never
 * while another runs on what is there.
 */
export async function ensureModules() {
  mkdirSync(usersPlace, { recursive: true });
  const release = await lock(path.join(place, 'packages.lock'));
  try {
    const outcome = await installWhenChanged();
    enterUser();
    return outcome;
  } finally {
    release();
  }
}

/** While this process lives, no other changes node_modules. */
function enterUser() {
  const file = path.join(usersPlace, String(process.pid));
  writeFileSync(file, identityOf(process.pid));
  process.once('exit', () => rmSync(file, { force: true }));
}

async function installWhenChanged() {
  const wanted = createHash('sha256').update(readFileSync(lockFile)).digest('hex');
  if (readHolder(stamp) === wanted) return 'present';
  if (isInstalledAsLocked()) {
    remember(wanted);
    return 'present';
  }
  const user = otherUser();
  if (user) {
    throw new Mend(
      `The lock file has changed, but process ${user} runs on the packages of before. Stop it, then start again.`,
    );
  }
  const parameters = ['ci', '--include=dev', '--no-audit', '--no-fund', '--prefer-offline'];
  await run('npm', parameters, { env: environment({ NODE_ENV: '' }) });
  writeFileSync(stamp, wanted);
  return 'installed';
}

/** Packages that somebody else installed are looked through at each start instead. */
function remember(wanted) {
  try {
    writeFileSync(stamp, wanted);
  } catch (error) {
    if (error.code !== 'EACCES' && error.code !== 'EROFS') throw error;
  }
}

function otherUser() {
  for (const name of readdirSync(usersPlace)) {
    const holder = readHolder(path.join(usersPlace, name));
    if (holder && isAlive(holder) && Number(name) !== process.pid) return name;
    if (Number(name) !== process.pid) rmSync(path.join(usersPlace, name), { force: true });
  }
  return null;
}

/** True when npm's own account of node_modules agrees with the lock file, whoever installed. */
function isInstalledAsLocked() {
  const account = path.join(root, 'node_modules/.package-lock.json');
  if (!existsSync(account)) return false;
  const installed = JSON.parse(readFileSync(account, 'utf8')).packages;
  const locked = JSON.parse(readFileSync(lockFile, 'utf8')).packages;
  return Object.entries(locked).every(([name, entry]) => {
    if (name === '') return true;
    const present = installed[name];
    return present ? present.version === entry.version : Boolean(entry.optional);
  });
}
