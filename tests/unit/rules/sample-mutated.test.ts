import { expect, it } from 'vitest';
import { fateOf, harmedFile, harmedInside } from '../../support/mutated-samples.ts';
import { seededRandom } from '../../trials/seeded-random.ts';

// `npm run trials` does this with a hundred thousand.
it('two thousand harmed files are refused in words or read row by row, none for long', async () => {
  const random = seededRandom(20_261_130);
  const problems = new Set<string | null>();
  let rows = 0;
  let refused = 0;
  for (let file = 0; file < 2000; file++) {
    const fate = await fateOf(harmedFile(random));
    expect(fate.wrong).toEqual([]);
    expect(fate.ms).toBeLessThan(5000);
    problems.add(fate.problem);
    rows += fate.rows;
    refused += fate.refused;
  }
  expect(rows).toBeGreaterThan(2000);
  expect(refused).toBeGreaterThan(100);
  expect(problems.size).toBeGreaterThan(5);
}, 120_000);

it('harmed workbooks are, too', async () => {
  const random = seededRandom(20_261_131);
  for (let file = 0; file < 60; file++) {
    expect((await fateOf(harmedFile(random, 'workbook'))).wrong).toEqual([]);
    expect((await fateOf(harmedInside(random))).wrong).toEqual([]);
  }
}, 120_000);
