import { type Fate, fateOf, harmedFile, harmedInside } from '../support/mutated-samples.ts';
import { differences, someDialect, trueSamples } from '../support/sample-dialects.ts';
import { seededRandom } from './seeded-random.ts';
import type { SlowTrial } from './trial.ts';

const longestMs = 5000;

/** Files of samples, harmed: how many were read wrongly, thrown over or took too long. */
export async function tryHarmed(seed: number, files: number, workbooks: number) {
  const random = seededRandom(seed);
  const figures = { files: files + workbooks, rows: 0, refused: 0, notTaken: 0, slowestMs: 0, wrong: 0 };
  const count = ({ rows, refused, problem, ms, wrong }: Fate) => {
    figures.rows += rows;
    figures.refused += refused;
    figures.notTaken += problem === null ? 0 : 1;
    figures.slowestMs = Math.max(figures.slowestMs, ms);
    figures.wrong += wrong.length;
    for (const one of wrong.slice(0, 3)) console.error(one);
  };
  for (let file = 0; file < files; file++) count(await fateOf(harmedFile(random)));
  for (let file = 0; file < workbooks; file++) {
    count(await fateOf(file % 2 === 0 ? harmedFile(random, 'workbook') : harmedInside(random)));
  }
  return { figures, agrees: figures.wrong === 0 && figures.slowestMs < longestMs && figures.refused > 0 };
}

/** Tables of samples, written in some dialect and read back: how many came back otherwise. */
export async function tryDialects(seed: number, tables: number, workbooks: number) {
  const random = seededRandom(seed);
  let different = 0;
  const compare = async (inWorkbook: boolean) => {
    const samples = trueSamples(random);
    const dialect = { ...someDialect(random), ...(inWorkbook ? { encoding: 'workbook' as const } : {}) };
    const found = await differences(samples, dialect);
    for (const one of found.slice(0, 3)) console.error(one);
    if (found.length > 0) different += 1;
  };
  for (let table = 0; table < tables; table++) await compare(false);
  for (let table = 0; table < workbooks; table++) await compare(true);
  return { figures: { tables: tables + workbooks, different }, agrees: different === 0 };
}

export const sampleFileTrials: SlowTrial[] = [
  {
    name: 'a hundred thousand harmed files of samples: each refused in words or read row by row',
    run: (seed) => tryHarmed(seed, 99_000, 1000),
  },
  {
    name: 'twenty thousand tables of samples in any dialect: each comes back as it was',
    run: (seed) => tryDialects(seed, 19_000, 1000),
  },
];
