/** Installs Debian packages: as root, by `sudo -n`, by asking sudo on a terminal, or by naming the one command. */
import { spawnSync } from 'node:child_process';
import { isRoot, PlainError } from './system.mjs';

// Without this file Debian makes a cluster of its own on port 5432, which Ebbline has no use for.
const QUIET_CLUSTER =
  'mkdir -p /etc/postgresql-common && ' +
  '{ [ -e /etc/postgresql-common/createcluster.conf ] || ' +
  'echo "create_main_cluster = false" > /etc/postgresql-common/createcluster.conf; }';

/** The one command that installs them, for a shell with root's rights. */
export function installCommand(packages) {
  const first = packages.includes('postgresql') ? `${QUIET_CLUSTER} && ` : '';
  return (
    `${first}apt-get update -qq && DEBIAN_FRONTEND=noninteractive apt-get install -y -qq ` +
    `--no-install-recommends -o Dpkg::Options::=--force-confold ${packages.join(' ')}`
  );
}

/** @throws PlainError when nobody here may install */
export function installPackages(packages) {
  const command = installCommand(packages);
  const byHand = `sudo sh -c '${command}'`;
  const asRoot = shell(command, byHand);
  console.log(`Installing ${packages.join(' and ')} from Debian ...`);
  const done = spawnSync(...asRoot, { stdio: 'inherit' });
  if (done.status !== 0)
    throw new PlainError(`Installing ${packages.join(' and ')} failed. To try by hand: ${byHand}`);
}

function shell(command, byHand) {
  if (isRoot) return ['sh', ['-c', command]];
  const sudo = spawnSync('sudo', ['-n', 'true'], { stdio: 'ignore' });
  if (sudo.status === 0) return ['sudo', ['-n', 'sh', '-c', command]];
  if (!sudo.error && process.stdin.isTTY) return ['sudo', ['sh', '-c', command]];
  throw new PlainError(
    `Ebbline needs packages of Debian, which only root can install. Run this once: ${byHand}`
  );
}
