import { createHash } from 'node:crypto';
import { existsSync, readFileSync, writeFileSync } from 'node:fs';
import { join } from 'node:path';
import { underLock } from './lock.mjs';
import { Failure, say } from './messages.mjs';
import { run } from './run.mjs';

const readIfThere = (file) => (existsSync(file) ? readFileSync(file, 'utf8') : '');

// npm writes this file last, so an installation by hand that is complete and agrees with the lock need not be repeated.
function installedAsLocked(root) {
  const recorded = readIfThere(join(root, 'node_modules/.package-lock.json'));
  if (!recorded) return false;
  const installed = JSON.parse(recorded).packages;
  const locked = Object.entries(JSON.parse(readFileSync(join(root, 'package-lock.json'), 'utf8')).packages);
  return locked.every(([path, { version, optional }]) => {
    if (path === '') return true;
    return installed[path] ? installed[path].version === version : Boolean(optional);
  });
}

// What npm hands down from its own command line (--omit, --dry-run ...) must not change what is installed; where it
// installs from must stay.
function npmEnvironment() {
  const kept = /^npm_config_(registry|userconfig|globalconfig|cache|cafile|proxy|https_proxy|noproxy)$/i;
  const entries = Object.entries(process.env);
  return Object.fromEntries(entries.filter(([name]) => !/^npm_config_/i.test(name) || kept.test(name)));
}

async function install(root) {
  say('Installing the packages (about half a minute) …');
  const npm = process.env.npm_execpath;
  const [command, ...first] = npm?.endsWith('.js') ? [process.execPath, npm] : ['npm'];
  const { code } = await run(command, [...first, 'ci', '--include=dev', '--loglevel=error'], {
    cwd: root,
    env: npmEnvironment(),
    output: 'show',
  });
  if (code !== 0) throw new Failure('npm could not install the packages; the reason stands above.');
}

/** Installs the packages of `root` when they are missing, outdated, half installed or made for another Node.js. */
export async function providePackages(root) {
  await underLock(
    `${root} packages`,
    'Waiting for another start that is installing the packages …',
    async () => {
      const stampFile = join(root, 'node_modules/.stamp');
      const lockHash = createHash('sha256')
        .update(readFileSync(join(root, 'package-lock.json')))
        .digest('hex');
      const stamp = `${process.version} ${lockHash}`;
      const found = readIfThere(stampFile);
      if (found === stamp) return;
      const sameNode = found === '' || found.startsWith(`${process.version} `);
      if (!sameNode || !installedAsLocked(root)) await install(root);
      writeFileSync(stampFile, stamp);
    },
  );
}
