import { closeSync, openSync, readFileSync, renameSync, rmSync, writeSync } from 'node:fs';
import { setTimeout as delay } from 'node:timers/promises';

/** A process is named by its id and its start, because ids are given out again. */
export function identityOf(pid) {
  try {
    const stat = readFileSync(`/proc/${pid}/stat`, 'utf8');
    const fields = stat.slice(stat.lastIndexOf(')') + 2).split(' ');
    const state = fields[0];
    return state === 'Z' ? null : `${pid}:${fields[19]}`;
  } catch {
    return null;
  }
}

/** True while the very process that `identity` named is alive. */
export function isAlive(identity) {
  return identity !== null && identityOf(Number.parseInt(identity, 10)) === identity;
}

/** Resolves when the condition holds; false when it did not within `timeoutMs`. */
export async function waitUntil(condition, timeoutMs, everyMs = 50) {
  const end = Date.now() + timeoutMs;
  while (Date.now() < end) {
    if (await condition()) return true;
    await delay(everyMs);
  }
  return Boolean(await condition());
}

/** SIGTERM, and SIGKILL to what has not gone after `patienceMs`. */
export async function stopProcess(identity, patienceMs = 60_000) {
  const pid = Number.parseInt(identity, 10);
  signal(pid, 'SIGTERM');
  if (await waitUntil(() => !isAlive(identity), patienceMs)) return;
  signal(pid, 'SIGKILL');
  await waitUntil(() => !isAlive(identity), 5_000);
}

function signal(pid, name) {
  try {
    process.kill(pid, name);
  } catch {
    // It went by itself in the meantime.
  }
}

/**
 * Calls `onDeath` once when the process that started this one has gone. A killed npm sends no
 * signal to what it runs, and between npm and us may stand a shell that outlives it.
 */
export function watchParents(onDeath) {
  const parents = [process.ppid];
  if (isShellCommand(process.ppid)) parents.push(parentOf(process.ppid));
  const watched = parents.filter((pid) => pid > 1).map((pid) => identityOf(pid));
  if (watched.length === 0) return () => {};
  const timer = setInterval(() => {
    if (watched.every(isAlive)) return;
    clearInterval(timer);
    onDeath();
  }, 250);
  timer.unref();
  return () => clearInterval(timer);
}

function isShellCommand(pid) {
  try {
    const [program, flag] = readFileSync(`/proc/${pid}/cmdline`, 'utf8').split('\0');
    return /(^|\/)(sh|dash|bash)$/.test(program) && flag === '-c';
  } catch {
    return false;
  }
}

function parentOf(pid) {
  try {
    const stat = readFileSync(`/proc/${pid}/stat`, 'utf8');
    return Number(stat.slice(stat.lastIndexOf(')') + 2).split(' ')[1]);
  } catch {
    return 0;
  }
}

/**
 * Takes the lock file, or gives null when a live process holds it. The lock of a dead one is
 * taken over. What is returned lets go of it.
 */
export function tryLock(file) {
  const mine = identityOf(process.pid);
  for (let attempt = 0; attempt < 5; attempt += 1) {
    if (writeNew(file, mine)) {
      return () => {
        if (readHolder(file) === mine) rmSync(file, { force: true });
      };
    }
    const holder = readHolder(file);
    if (holder !== null && isAlive(holder)) return null;
    setAside(file);
  }
  return null;
}

/**
 * Like `tryLock`, but waits for the holder; `onWait` is called once, with its id, when there is one.
 *
 * @param {string} file
 * @param {{ timeoutMs?: number, onWait?: (pid: number) => void }} [options]
 */
export async function lock(file, { timeoutMs = 600_000, onWait = () => {} } = {}) {
  let release = tryLock(file);
  if (release === null) onWait(Number.parseInt(readHolder(file) ?? '0', 10));
  await waitUntil(() => (release ??= tryLock(file)) !== null, timeoutMs, 200);
  if (release === null) throw new Error(`${file} stayed locked for ${timeoutMs / 1000} s.`);
  return release;
}

export function readHolder(file) {
  try {
    return readFileSync(file, 'utf8').trim() || null;
  } catch {
    return null;
  }
}

function writeNew(file, text) {
  try {
    const handle = openSync(file, 'wx', 0o600);
    writeSync(handle, text);
    closeSync(handle);
    return true;
  } catch (error) {
    if (error.code === 'EEXIST') return false;
    throw error;
  }
}

/** Renames before removing, so that two takers of one dead lock do not remove each other's. */
function setAside(file) {
  const aside = `${file}.${process.pid}`;
  try {
    renameSync(file, aside);
  } catch {
    return;
  }
  const holder = readHolder(aside);
  if (holder !== null && isAlive(holder)) renameSync(aside, file);
  else rmSync(aside, { force: true });
}
