import { createHash } from 'node:crypto';
import { existsSync, mkdirSync, readdirSync, readFileSync, rmSync, writeFileSync } from 'node:fs';
import { join } from 'node:path';
import { underLock } from './lock.mjs';
import { Failure, say } from './messages.mjs';
import { run } from './run.mjs';

const configuration = [
  'vite.config.ts',
  'quasar.config.ts',
  'tsconfig.json',
  'package.json',
  'package-lock.json',
];

const parts = {
  client: { sources: ['index.html', 'src', 'shared'], args: ['build'], result: 'dist/client/index.html' },
  server: {
    sources: ['server', 'shared', 'seeds'],
    args: ['build', '--ssr', '--outDir', 'dist/server'],
    result: 'dist/server/main.js',
  },
};

function filesIn(root, path) {
  if (!existsSync(join(root, path))) return [];
  const entries = readdirSync(join(root, path), { recursive: true, withFileTypes: true });
  return entries.filter((entry) => entry.isFile()).map((entry) => join(entry.parentPath, entry.name));
}

// By content: a checkout or a copy gives old files new times.
function fingerprint(root, sources) {
  const hash = createHash('sha256').update(process.version);
  for (const source of [...sources, ...configuration]) {
    const files = /\.\w+$/.test(source) ? [join(root, source)] : filesIn(root, source).sort();
    for (const file of files.filter((name) => existsSync(name))) {
      const content = readFileSync(file);
      hash.update(`${file.slice(root.length)} ${content.length}\n`).update(content);
    }
  }
  return hash.digest('hex');
}

async function buildPart(root, name) {
  const { sources, args, result } = parts[name];
  const stampFile = join(root, `dist/.${name}-stamp`);
  const stamp = fingerprint(root, sources);
  const isCurrent = existsSync(stampFile) && readFileSync(stampFile, 'utf8') === stamp;
  if (isCurrent && existsSync(join(root, result))) return;
  say(`Building the ${name} …`);
  rmSync(stampFile, { force: true });
  const vite = join(root, 'node_modules/vite/bin/vite.js');
  const env = { ...process.env, NODE_ENV: 'production' };
  const { code, output } = await run(process.execPath, [vite, ...args], { cwd: root, env });
  if (code !== 0) throw new Failure(`The ${name} could not be built:\n${output.trim()}`);
  mkdirSync(join(root, 'dist'), { recursive: true });
  writeFileSync(stampFile, stamp);
}

/** Builds the named parts ('client', 'server') of `root` whose sources have changed since their last build. */
export async function build(root, ...names) {
  await underLock(`${root} build`, 'Waiting for another start that is building …', async () => {
    for (const name of names) await buildPart(root, name);
  });
}
