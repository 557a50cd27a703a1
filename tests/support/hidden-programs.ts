import { chmodSync, existsSync, mkdirSync, readFileSync, writeFileSync } from 'node:fs';
import path from 'node:path';

/** A place to run start scripts in that knows no MariaDB, no Chromium and no real apt. */
export interface HiddenPrograms {
  env: NodeJS.ProcessEnv;
  /** What apt-get and sudo were asked for, a line each. */
  asked(): string[];
}

/** How sudo is there: not at all, asking for a password, or letting everything through. */
export type Sudo = 'absent' | 'asks' | 'lets';

/**
 * Puts recorders of apt-get and sudo on a PATH of their own, and says by FISHPLATE_PROGRAMS that
 * Debian's programs stand in a directory where none do. `install` is what the recorded install then
 * does, as shell; without it, it fails as apt does when it has no network.
 */
export function hidePrograms(
  directory: string,
  { sudo = 'absent', install = 'exit 100' }: { sudo?: Sudo; install?: string } = {},
): HiddenPrograms {
  const bin = path.join(directory, 'bin');
  const programs = path.join(directory, 'programs');
  const record = path.join(directory, 'asked');
  for (const place of [bin, programs]) {
    mkdirSync(place, { recursive: true });
    chmodSync(place, 0o777);
  }
  writeFileSync(record, '');
  chmodSync(record, 0o666);
  const note = (name: string) => `printf '%s\\n' "${name} $*" >>'${record}'\n`;
  const write = (name: string, script: string) => {
    writeFileSync(path.join(bin, name), `#!/bin/sh\n${note(name)}${script}\n`);
    chmodSync(path.join(bin, name), 0o755);
  };
  write('apt-get', `case "$*" in *' install '*) cd '${programs}' && ${install};; esac`);
  if (sudo === 'asks') write('sudo', 'exit 1');
  if (sudo === 'lets') write('sudo', 'shift; [ "$1" = true ] || exec "$@"');
  return {
    env: { PATH: bin, FISHPLATE_PROGRAMS: programs },
    asked: () =>
      existsSync(record) ? readFileSync(record, 'utf8').split('\n').filter(Boolean) : [],
  };
}
