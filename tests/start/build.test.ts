import { existsSync, mkdirSync, readFileSync, rmSync, symlinkSync, utimesSync, writeFileSync } from 'node:fs';
import { join } from 'node:path';
import { expect, test, vi } from 'vitest';
import { root, runProgram, temporaryFolder } from './processes.ts';

vi.setConfig({ testTimeout: 30_000 });

const config = `export default ({ isSsrBuild }) => ({
  build: isSsrBuild ? { rollupOptions: { input: { main: 'server/main.ts' } } } : { outDir: 'dist/client' },
});`;

function makeProject(): string {
  const folder = temporaryFolder();
  for (const name of ['src', 'server']) mkdirSync(join(folder, name));
  symlinkSync(join(root, 'node_modules'), join(folder, 'node_modules'));
  writeFileSync(join(folder, 'package.json'), JSON.stringify({ type: 'module' }));
  writeFileSync(join(folder, 'vite.config.ts'), config);
  writeFileSync(join(folder, 'index.html'), '<script type="module" src="/src/main.ts"></script>');
  writeFileSync(join(folder, 'src/main.ts'), 'document.title = process.env.NODE_ENV ?? "";');
  writeFileSync(join(folder, 'server/main.ts'), 'console.log("first");');
  return folder;
}

async function build(folder: string): Promise<{ code: number | string; printed: string }> {
  const running = runProgram([join(root, 'tests/start/provide.mjs'), 'build', folder, 'client', 'server']);
  return { code: await running.ended, printed: running.printed() };
}

test('client and server are built when missing, and only the part whose content changed is built again', async () => {
  const folder = makeProject();
  expect(await build(folder)).toEqual({ code: 0, printed: 'Building the client …\nBuilding the server …\n' });
  expect(existsSync(join(folder, 'dist/client/index.html'))).toBe(true);

  const untouchedContent = new Date();
  utimesSync(join(folder, 'src/main.ts'), untouchedContent, untouchedContent);
  expect(await build(folder)).toEqual({ code: 0, printed: '' });

  writeFileSync(join(folder, 'server/main.ts'), 'console.log("second");');
  expect(await build(folder)).toEqual({ code: 0, printed: 'Building the server …\n' });
  expect(readFileSync(join(folder, 'dist/server/main.js'), 'utf8')).toContain('second');

  rmSync(join(folder, 'dist/client/index.html'));
  expect(await build(folder)).toEqual({ code: 0, printed: 'Building the client …\n' });
});

test('a build that fails says why, and is tried again', async () => {
  const folder = makeProject();
  writeFileSync(join(folder, 'src/main.ts'), 'import "./not-there.ts";');
  const failed = await build(folder);
  expect(failed.code).toBe(1);
  expect(failed.printed).toContain('The client could not be built:');
  expect(failed.printed).toContain('not-there');
  writeFileSync(join(folder, 'src/main.ts'), 'document.title = "mended";');
  expect((await build(folder)).code).toBe(0);
});
