import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { differences, someDialect, trueSamples } from '../../support/sample-dialects.ts';
import { seededRandom } from '../../trials/seeded-random.ts';

// `npm run trials` does this with many more.
describe('any table of samples, written in any dialect', () => {
  it('comes back as it was, and what the file shows by itself is never wrong', async () => {
    await fc.assert(
      fc.asyncProperty(fc.integer(), async (seed) => {
        const random = seededRandom(seed);
        expect(await differences(trueSamples(random), someDialect(random))).toEqual([]);
      }),
      { numRuns: 200 },
    );
  }, 30_000);

  it('comes back from a workbook, too', async () => {
    await fc.assert(
      fc.asyncProperty(fc.integer(), async (seed) => {
        const random = seededRandom(seed);
        const dialect = { ...someDialect(random), encoding: 'workbook' as const };
        expect(await differences(trueSamples(random), dialect)).toEqual([]);
      }),
      { numRuns: 20 },
    );
  }, 30_000);
});
