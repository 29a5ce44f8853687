import { accessSync, constants, existsSync, readdirSync, readFileSync, statSync } from 'node:fs';
import { userInfo } from 'node:os';
import { delimiter, join } from 'node:path';
import { installFromDebian } from './apt.mjs';
import { Failure } from './messages.mjs';
import { run } from './run.mjs';

const oldestMajor = 15;
const debianFolder = '/usr/lib/postgresql';

// psql may be installed without a server, so the server's own programs are what counts.
const isServer = (bin) =>
  ['initdb', 'pg_ctl', 'postgres'].every((program) => {
    try {
      accessSync(join(bin, program), constants.X_OK);
      return true;
    } catch {
      return false;
    }
  });

async function majorOf(bin) {
  const { output } = await run(join(bin, 'postgres'), ['--version'], { cwd: '/' });
  return Number(/(\d+)/.exec(output)?.[1]);
}

async function installedServers() {
  const debian = existsSync(debianFolder) ? readdirSync(debianFolder) : [];
  const bins = [
    ...debian.map((version) => join(debianFolder, version, 'bin')),
    ...(process.env.PATH ?? '').split(delimiter),
  ].filter(isServer);
  const servers = await Promise.all(bins.map(async (bin) => ({ bin, major: await majorOf(bin) })));
  return servers.filter(({ major }) => major >= oldestMajor).sort((a, b) => b.major - a.major);
}

/** The newest PostgreSQL server on this machine, installed first when there is none. */
async function provideServers() {
  const found = await installedServers();
  if (found.length > 0) return found;
  await installFromDebian(`PostgreSQL ${oldestMajor}`, ['postgresql']);
  const installed = await installedServers();
  if (installed.length > 0) return installed;
  throw new Failure(
    `Cupel needs PostgreSQL ${oldestMajor} or newer, and this Debian has none. Install one, then try again.`,
  );
}

/** Root may not run PostgreSQL: the ids of the user who does, or {} where that is simply us. */
function serverUser() {
  if (process.getuid() !== 0) {
    try {
      userInfo();
    } catch {
      throw new Failure(
        `PostgreSQL needs a user with a name, and user ${process.getuid()} has none on this machine.`,
      );
    }
    return {};
  }
  const line = readFileSync('/etc/passwd', 'utf8')
    .split('\n')
    .find((entry) => entry.startsWith('postgres:'));
  if (!line)
    throw new Failure('PostgreSQL may not run as root, and this machine has no user "postgres" to run it.');
  const [, , uid, gid] = line.split(':').map(Number);
  return { uid, gid };
}

/** Gives { servers, user }: the installed servers, newest first, and who runs them. */
export async function providePostgres() {
  return { servers: await provideServers(), user: serverUser() };
}

/** The server and user for the data in `data`: new data get the newest server, old data keep theirs. */
export function serverFor({ servers, user }, data) {
  if (!existsSync(join(data, 'PG_VERSION'))) return { bin: servers[0].bin, user };
  const major = Number(readFileSync(join(data, 'PG_VERSION'), 'utf8'));
  const server = servers.find((candidate) => candidate.major === major);
  if (!server) {
    throw new Failure(
      `The data in ${data} need PostgreSQL ${major}, which is not installed on this machine any more.`,
    );
  }
  const { uid, gid } = statSync(data);
  return { bin: server.bin, user: process.getuid() === 0 && uid !== 0 ? { uid, gid } : user };
}
