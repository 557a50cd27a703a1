import { existsSync } from 'node:fs';
import path from 'node:path';
import { environment } from './settings.mjs';

// A plain user's PATH has no sbin.
const usual = ['/usr/sbin', '/usr/bin', '/usr/local/sbin', '/usr/local/bin'];

/**
 * A program that Debian's packages bring, by the first of its names that is there, or null.
 * FISHPLATE_PROGRAMS names other directories than the usual ones, with colons between.
 */
export function findProgram(...names) {
  const elsewhere = environment().FISHPLATE_PROGRAMS;
  const directories = elsewhere ? elsewhere.split(':') : usual;
  const files = directories.flatMap((directory) => names.map((name) => path.join(directory, name)));
  return files.find((file) => existsSync(file)) ?? null;
}

/** The database server's programs, or null when one of them is missing. */
export function findMariadb() {
  const server = findProgram('mariadbd');
  const installer = findProgram('mariadb-install-db');
  // The installer asks it, and it comes with another package.
  return server && installer && findProgram('my_print_defaults') ? { server, installer } : null;
}

/** The browser that tests and pictures use, or null. */
export const findBrowser = () => findProgram('chromium', 'chromium-browser');
