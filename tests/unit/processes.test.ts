import { spawn } from 'node:child_process';
import { once } from 'node:events';
import { existsSync, mkdtempSync, rmSync, writeFileSync } from 'node:fs';
import os from 'node:os';
import path from 'node:path';
import { afterAll, describe, expect, it } from 'vitest';
import { identityOf, isAlive, lock, stopProcess, tryLock } from '../../scripts/lib/processes.mjs';

const place = mkdtempSync(path.join(os.tmpdir(), 'fishplate-locks-'));
const file = path.join(place, 'a.lock');

/** A process that lives until it is told to end. */
async function livingProcess(program = 'setInterval(() => {}, 1000)') {
  const child = spawn(process.execPath, ['-e', `${program}; console.log('up')`]);
  await once(child.stdout, 'data');
  return { child, identity: identityOf(child.pid) as string };
}

describe('a lock file', () => {
  afterAll(() => rmSync(place, { recursive: true, force: true }));

  it('has one holder at a time, and is free again when let go', () => {
    const release = tryLock(file);
    expect(release).not.toBeNull();
    expect(tryLock(file)).toBeNull();
    release?.();
    expect(existsSync(file)).toBe(false);
  });

  it('is respected while its holder lives, and taken over once that has died', async () => {
    const { child, identity } = await livingProcess();
    writeFileSync(file, identity);
    expect(tryLock(file)).toBeNull();

    const exited = once(child, 'exit');
    child.kill('SIGKILL');
    await exited;
    const release = tryLock(file);
    expect(release).not.toBeNull();
    release?.();
  });

  it('is not mistaken for held when its number was given to another process', () => {
    writeFileSync(file, `${process.pid}:1`);
    const release = tryLock(file);
    expect(release).not.toBeNull();
    release?.();
  });

  it('can be waited for', async () => {
    const { child, identity } = await livingProcess();
    writeFileSync(file, identity);
    let waitedFor = 0;
    const waiting = lock(file, {
      timeoutMs: 10_000,
      onWait: (holder: number) => {
        waitedFor = holder;
        child.kill('SIGKILL');
      },
    });
    (await waiting)();
    expect(waitedFor).toBe(child.pid);
  });
});

describe('stopping a process', () => {
  it('asks first, and kills what does not listen', async () => {
    const { identity } = await livingProcess(
      "process.on('SIGTERM', () => {}); setInterval(() => {}, 1000)",
    );
    await stopProcess(identity, 300);
    expect(isAlive(identity)).toBe(false);
  });
});
