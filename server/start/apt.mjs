import { closeSync, existsSync, mkdtempSync, openSync, readFileSync, rmSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { setTimeout as pause } from 'node:timers/promises';
import { Failure, say } from './messages.mjs';
import { run } from './run.mjs';

const patienceMs = 300_000;

/** How to become root: [] when it is us already, ['sudo', '-n'] where that asks no password, else null. */
async function waysToRoot() {
  if (process.getuid() === 0) return [];
  const { code } = await run('sudo', ['-n', 'true']);
  return code === 0 ? ['sudo', '-n'] : null;
}

/**
 * Runs as root; the output goes to a file and the program has a session of its own, so that Ctrl-C in the middle of an
 * installation ends our script but leaves no half-installed package.
 */
async function runAsRoot(prefix, args, logFile) {
  const [command, ...rest] = [...prefix, 'env', 'DEBIAN_FRONTEND=noninteractive', ...args];
  const log = openSync(logFile, 'w');
  const { code } = await run(command, rest, { output: log, detached: true, whenEnding: 'leave' });
  closeSync(log);
  return { code, output: readFileSync(logFile, 'utf8') };
}

// apt-get can wait for the lock of an installation but not for that of an update.
async function update(prefix, logFile) {
  const giveUpAt = Date.now() + patienceMs;
  for (;;) {
    const { output } = await runAsRoot(prefix, ['apt-get', '-q', 'update'], logFile);
    if (!/Could not get lock|Unable to lock/.test(output) || Date.now() > giveUpAt) return;
    await pause(1000);
  }
}

// The package would otherwise make and start a cluster of its own that nobody asked for.
const noMainCluster =
  'mkdir -p /etc/postgresql-common && test -e /etc/postgresql-common/createcluster.conf || ' +
  "echo 'create_main_cluster = false' > /etc/postgresql-common/createcluster.conf";

/** Installs Debian packages; `title` is what people call them. */
export async function installFromDebian(title, packages) {
  if (!existsSync('/usr/bin/apt-get')) {
    throw new Failure(
      `${title} is not installed. Install it with this system's package manager, then try again.`,
    );
  }
  const prefix = await waysToRoot();
  if (!prefix) {
    throw new Failure(
      `${title} is not installed, and installing it needs an administrator. ` +
        `Run this, then try again: sudo apt-get install --no-install-recommends ${packages.join(' ')}`,
    );
  }
  say(`Installing ${title} from Debian's packages (about a minute) …`);
  const folder = mkdtempSync(join(tmpdir(), 'cupel-apt-'));
  const logFile = join(folder, 'log');
  await update(prefix, logFile);
  if (packages.includes('postgresql')) await runAsRoot(prefix, ['sh', '-c', noMainCluster], logFile);
  const options = ['-o', `DPkg::Lock::Timeout=${patienceMs / 1000}`, '-o', 'Dpkg::Options::=--force-confold'];
  const install = ['apt-get', '-q', '-y', ...options, 'install', '--no-install-recommends', ...packages];
  const { code, output } = await runAsRoot(prefix, install, logFile);
  rmSync(folder, { recursive: true });
  if (code === 0) return;
  const reason = output.trim().split('\n').slice(-5).join('\n');
  throw new Failure(`Debian's packages for ${title} could not be installed:\n${reason}`);
}
