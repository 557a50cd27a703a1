import { environment } from './settings.mjs';
import { findBrowser, findMariadb } from './programs.mjs';
import { run, succeeds } from './run.mjs';
import { Mend } from './steps.mjs';

const oldestNode = [20, 19];

/** Throws when this Node is too old for what the project uses. */
export function checkNode(version = process.versions.node) {
  const [major, minor] = version.split('.').map(Number);
  const [wantedMajor, wantedMinor] = oldestNode;
  if (major > wantedMajor || (major === wantedMajor && minor >= wantedMinor)) return version;
  throw new Mend(`Fishplate needs Node ${oldestNode.join('.')} or newer; this is ${version}.`);
}

/**
 * Installs the Debian packages that are missing: MariaDB's server without its service, and for
 * tests Chromium.
 */
export async function ensurePackages({ database = true, browser = false }) {
  const wanted = [
    ...(database && !findMariadb() ? ['mariadb-server-core', 'mariadb-client-core'] : []),
    ...(browser && !findBrowser() ? ['chromium'] : []),
  ];
  if (wanted.length === 0) return 'present';
  const install = ['install', '-y', '--no-install-recommends', ...wanted];
  const prefix = rightToInstall(install);
  const aptGet = async (parameters) => {
    const command = [...prefix, 'apt-get', '-o', 'DPkg::Lock::Timeout=300', ...parameters];
    await run(command[0], command.slice(1), {
      env: environment({ DEBIAN_FRONTEND: 'noninteractive' }),
    });
  };
  await aptGet(['update']);
  await aptGet(install);
  return `installed ${wanted.join(', ')}`;
}

function rightToInstall(install) {
  if (process.getuid() === 0) return [];
  if (succeeds('sudo', ['-n', 'true'])) return ['sudo', '-n'];
  throw new Mend(
    `Debian packages are missing, and only root may install them. Run this once, then start again:\n\n  sudo apt-get update && sudo apt-get ${install.join(' ')}\n`,
  );
}
