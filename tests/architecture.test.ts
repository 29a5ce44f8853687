import { execFileSync } from 'node:child_process';
import { readFileSync } from 'node:fs';
import path from 'node:path';
import { describe, expect, it } from 'vitest';
import { targetParam } from '../shared/contracts/access.ts';
import type { EndpointSpec } from '../shared/contracts/endpoint.ts';
import { endpoints } from '../shared/contracts/index.ts';

const root = path.resolve(import.meta.dirname, '..');
const tracked = execFileSync('git', ['ls-files', '--cached', '--others', '--exclude-standard'], {
  cwd: root,
  encoding: 'utf8',
})
  .split('\n')
  .filter((file) => /^(src|server|shared|seeds)\/.*\.(ts|vue|mjs)$/.test(file));
const sources = new Map(
  tracked.flatMap((file) => {
    try {
      return [[file, readFileSync(path.join(root, file), 'utf8')] as const];
    } catch {
      return []; // deleted, not yet committed
    }
  }),
);

/** Floors, and what each may import: arrows point down only. */
const mayImport: Record<string, readonly string[]> = {
  'shared/numerics': ['shared/numerics'],
  'shared/contracts': ['shared/contracts'],
  'shared/rules': ['shared/rules', 'shared/contracts', 'shared/numerics'],
  src: ['src', 'shared', 'quasar.config.ts'],
  server: ['server', 'shared', 'seeds/demo.ts'],
  seeds: ['seeds', 'server', 'shared'],
};

function importsOf(file: string, text: string): string[] {
  const found = [...text.matchAll(/(?:from|import)\s*\(?\s*'(\.[^']+)'/g)].map((match) => match[1]!);
  return found.map((target) => path.normalize(path.join(path.dirname(file), target)));
}

const floorOf = (file: string): string =>
  Object.keys(mayImport).find((floor) => file.startsWith(`${floor}/`))!;

describe('the layout', () => {
  it('lets arrows point down only', () => {
    const wrong: string[] = [];
    for (const [file, text] of sources) {
      const allowed = mayImport[floorOf(file)]!;
      for (const target of importsOf(file, text)) {
        if (!allowed.some((floor) => target === floor || target.startsWith(`${floor}/`)))
          wrong.push(`${file} → ${target}`);
      }
    }
    expect(wrong).toEqual([]);
  });

  it('lets the numerics import nothing but numerical packages', () => {
    const wrong: string[] = [];
    for (const [file, text] of sources) {
      // The generator of the kernels writes source files; it is run by hand and never shipped.
      if (!file.startsWith('shared/numerics/') || file.endsWith('/generate.ts')) continue;
      for (const [, name] of text.matchAll(/from '([^.'][^']*)'/g)) {
        if (!/^(ml-matrix|@stdlib\/)/.test(name!)) wrong.push(`${file} → ${name}`);
      }
    }
    expect(wrong).toEqual([]);
  });

  it('lets features call each other’s services, never repos of features they do not know', () => {
    // Rows of another feature are read through its repo only where no decision is made on them.
    const wrong: string[] = [];
    for (const [file, text] of sources) {
      if (!file.endsWith('/routes.ts')) continue;
      const own = path.dirname(file);
      for (const target of importsOf(file, text)) {
        if (/\/repo\.ts$/.test(target) && path.dirname(target) !== own) wrong.push(`${file} → ${target}`);
      }
    }
    expect(wrong).toEqual([]);
  });

  it('keeps the environment behind one door', () => {
    const readers = [...sources]
      .filter(([file, text]) => !file.startsWith('server/start/') && /process\.env/.test(text))
      .map(([file]) => file);
    expect(readers).toEqual(['server/main.ts']);
  });

  it('keeps files short', () => {
    const long = [...sources]
      .filter(([file]) => !file.includes('/generated/'))
      .filter(([, text]) => text.split('\n').length > 251)
      .map(([file, text]) => `${file}: ${text.split('\n').length} lines`);
    expect(long).toEqual([]);
  });

  it('evaluates no text as code', () => {
    const wrong = [...sources].filter(([, text]) => /new Function|\beval\(/.test(text)).map(([file]) => file);
    expect(wrong).toEqual([]);
  });

  it('has no folder that says nothing', () => {
    const vague = [...sources.keys()].filter((file) => /(^|\/)(utils?|helpers?|common)(\/|\.)/.test(file));
    expect(vague).toEqual([]);
  });

  it('documents what shared/ exports', () => {
    const silent: string[] = [];
    for (const [file, text] of sources) {
      if (!/^shared\/(rules|numerics)\//.test(file) || file.includes('/generated/')) continue;
      for (const match of text.matchAll(/(\*\/\n)?^export (?:async )?function (\w+)/gm)) {
        if (!match[1]) silent.push(`${file}: ${match[2]}`);
      }
    }
    expect(silent).toEqual([]);
  });
});

describe('the endpoint table', () => {
  const table = Object.entries(endpoints as Record<string, EndpointSpec>);

  it('names in each path the row that access is decided on', () => {
    const wrong = table.filter(([, { access, path: address }]) => {
      if (typeof access !== 'object' || access.on === 'company' || access.on === 'sites') return false;
      return !address.split('/').includes(`:${targetParam[access.on]}`);
    });
    expect(wrong.map(([name]) => name)).toEqual([]);
  });

  it('has no address twice', () => {
    const addresses = table.map(([, { method, path: address }]) => `${method} ${address}`);
    expect(new Set(addresses).size).toBe(addresses.length);
  });

  it('gives each endpoint an example that fits its reply', () => {
    const wrong = table.filter(([, { reply, example }]) => !reply.safeParse(example).success);
    expect(wrong.map(([name]) => name)).toEqual([]);
  });

  it('limits the size of each upload', () => {
    const wrong = table.filter(([, spec]) => spec.kind === 'upload' && !spec.maxBytes);
    expect(wrong.map(([name]) => name)).toEqual([]);
  });
});

describe('the migrations', () => {
  it('are complete: nothing in the schema waits for one', () => {
    const said = execFileSync('npx', ['drizzle-kit', 'generate', '--name', 'nothing'], {
      cwd: root,
      encoding: 'utf8',
    });
    expect(said).toContain('No schema changes');
  }, 60_000);
});
