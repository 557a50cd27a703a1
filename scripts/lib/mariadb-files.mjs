import { spawnSync } from 'node:child_process';
import { randomBytes } from 'node:crypto';
import {
  existsSync,
  lchownSync,
  mkdirSync,
  readFileSync,
  readdirSync,
  renameSync,
  rmSync,
  statSync,
  writeFileSync,
} from 'node:fs';
import path from 'node:path';
import { readHolder } from './processes.mjs';

/** Makes the directory of one database server and says where in it everything stands. */
export function prepare(dir) {
  mkdirSync(dir, { recursive: true, mode: 0o755 });
  const place = {
    dir,
    data: path.join(dir, 'data'),
    // Its own: at its start a MariaDB removes temporary tables, also those of a running neighbour.
    temporary: path.join(dir, 'tmp'),
    log: path.join(dir, 'mariadb.log'),
    pidFile: path.join(dir, 'mariadb.pid'),
    passwordFile: path.join(dir, 'password'),
    account: null,
  };
  mkdirSync(place.data, { recursive: true, mode: 0o700 });
  mkdirSync(place.temporary, { recursive: true, mode: 0o700 });
  place.account = accountFor(place);
  return place;
}

/**
 * MariaDB refuses to run as root by accident. As root it runs as `mysql` where that account
 * exists and can reach the directory (it cannot below /root), else as root said aloud.
 */
function accountFor(place) {
  if (process.getuid() !== 0) return null;
  const entry = readFileSync('/etc/passwd', 'utf8')
    .split('\n')
    .map((line) => line.split(':'))
    .find(([name]) => name === 'mysql');
  const root = { name: 'root', uid: 0, gid: 0 };
  if (!entry) return own(place, root);
  const mysql = { name: 'mysql', uid: Number(entry[2]), gid: Number(entry[3]) };
  own(place, mysql);
  const reach = spawnSync('/bin/sh', ['-c', 'test -w .'], { cwd: '/', ...ids(mysql) });
  const reachesData = spawnSync('/bin/sh', ['-c', 'test -w "$1"', 'sh', place.data], {
    cwd: '/',
    ...ids(mysql),
  });
  return reach.error || reachesData.status !== 0 ? own(place, root) : mysql;
}

function own(place, account) {
  const hand = (file) => {
    const stat = statSync(file, { throwIfNoEntry: false });
    if (stat && stat.uid !== account.uid) lchownSync(file, account.uid, account.gid);
    if (stat?.isDirectory()) {
      for (const entry of readdirSync(file, { withFileTypes: true })) {
        if (!entry.isSymbolicLink()) hand(path.join(file, entry.name));
      }
    }
  };
  hand(place.data);
  hand(place.temporary);
  if (existsSync(place.log)) lchownSync(place.log, account.uid, account.gid);
  return account;
}

const ids = ({ uid, gid }) => ({ uid, gid });

/** Fills an empty data directory. Root gets in by socket alone; nobody gets in without a password. */
export function bootstrap(place, installer) {
  // Beside its place until it is whole: an interrupted one must not look like a database.
  const fresh = `${place.data}.new`;
  rmSync(fresh, { recursive: true, force: true });
  mkdirSync(fresh, { mode: 0o700 });
  if (place.account) lchownSync(fresh, place.account.uid, place.account.gid);
  const options = [
    '--no-defaults',
    `--datadir=${fresh}`,
    `--tmpdir=${place.temporary}`,
    '--auth-root-authentication-method=socket',
    '--skip-test-db',
    '--skip-name-resolve',
    '--innodb-buffer-pool-size=32M',
    ...(place.account ? [`--user=${place.account.name}`] : []),
  ];
  const run = spawnSync(installer, options, { encoding: 'utf8' });
  if (run.status !== 0) {
    throw new Error(`MariaDB could not make its first files:\n${run.stdout}${run.stderr}`);
  }
  rmSync(place.data, { recursive: true, force: true });
  renameSync(fresh, place.data);
}

/** The password of our one account, made once for a directory. */
export function rememberedPassword(file) {
  const known = readHolder(file);
  if (known) return known;
  const password = randomBytes(24).toString('base64url');
  writeFileSync(file, password, { mode: 0o600 });
  return password;
}
