import { readFile, readdir } from 'node:fs/promises';
import path from 'node:path';
import { gzipSync } from 'node:zlib';
import type { Figure } from './figure.ts';

/** First load of the board: the page, its scripts and styles as gzip, by the build's own list of what it preloads. */
export async function clientFigures(): Promise<Figure[]> {
  const folder = path.resolve('dist/client');
  const manifest = JSON.parse(await readFile(path.join(folder, '.vite/manifest.json'), 'utf8')) as Manifest;
  const wanted = new Set<string>();
  for (const entry of ['index.html', 'src/layouts/MainLayout.vue', 'src/pages/board/BoardPage.vue'])
    collect(manifest, entry, wanted);
  let bytes = gzipSync(await readFile(path.join(folder, 'index.html'))).length;
  for (const file of wanted) bytes += gzipSync(await readFile(path.join(folder, file)), { level: 9 }).length;
  const fonts = (await readdir(path.join(folder, 'assets'))).filter((file) =>
    /latin-(400|600)-normal.*\.woff2$/.test(file),
  );
  const information = { peer: '', peerValue: null, ratio: null, target: null, met: null };
  return [
    {
      name: `first load of the board, ${wanted.size} files, gzip`,
      value: bytes / 1000,
      unit: 'kB (aim 250)',
      ...information,
    },
    { name: 'fonts of the first load', value: fonts.length, unit: 'files', ...information },
  ];
}

type Manifest = Record<string, { file: string; css?: string[]; imports?: string[] }>;

function collect(manifest: Manifest, entry: string, wanted: Set<string>): void {
  const chunk = manifest[entry];
  if (!chunk || wanted.has(chunk.file)) return;
  wanted.add(chunk.file);
  for (const css of chunk.css ?? []) wanted.add(css);
  for (const next of chunk.imports ?? []) collect(manifest, next, wanted);
}
