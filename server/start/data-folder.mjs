import { createHash } from 'node:crypto';
import { chmodSync, mkdirSync } from 'node:fs';
import { dirname, resolve } from 'node:path';
import { Failure, say } from './messages.mjs';
import { run } from './run.mjs';

// Not through mkdir's mode: the umask would close the parents to the database's user, or the mode itself would.
export function makeFolder(folder) {
  const first = mkdirSync(folder, { recursive: true });
  if (!first) return;
  for (let made = folder; made.startsWith(first); made = dirname(made)) chmodSync(made, 0o755);
}

async function mayEnter(folder, user) {
  const { code } = await run('/bin/sh', ['-c', 'test -x "$0"', folder], { ...user, cwd: '/' });
  return code === 0;
}

/** The folder for everything that is kept, made when missing: CUPEL_DATA_DIR, else .data in `root`. */
export function dataFolder(root) {
  const folder = resolve(root, process.env.CUPEL_DATA_DIR || '.data');
  makeFolder(folder);
  return folder;
}

/**
 * The same for a cluster that `user` runs. Root's own clone is often closed to every other user; then the data go
 * beside those of the system's other services, unless a folder was asked for.
 */
export async function enterableDataFolder(root, user) {
  const folder = dataFolder(root);
  if (await mayEnter(folder, user)) return folder;
  const problem = `PostgreSQL may not run as root, and its user "postgres" may not enter ${folder}`;
  if (process.env.CUPEL_DATA_DIR) {
    throw new Failure(`${problem}. Name a folder in CUPEL_DATA_DIR whose parents are open to every user.`);
  }
  const elsewhere = `/var/lib/cupel/${createHash('sha256').update(root).digest('hex').slice(0, 12)}`;
  makeFolder(elsewhere);
  if (!(await mayEnter(elsewhere, user))) {
    throw new Failure(`${problem}. Name an open folder: CUPEL_DATA_DIR=/some/folder npm start`);
  }
  say(`${problem}, so the data are kept in ${elsewhere}. For another folder set CUPEL_DATA_DIR.`);
  return elsewhere;
}
