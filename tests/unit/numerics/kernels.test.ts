import { readFileSync } from 'node:fs';
import { fileURLToPath } from 'node:url';
import { describe, expect, it } from 'vitest';
import { filterSeries } from '../../../shared/numerics/filter-run.ts';
import { kalmanFilter } from '../../../shared/numerics/kalman.ts';
import { kernelSource, unrolledSizes } from '../../../shared/numerics/kernels/kernel-source.ts';
import { answered } from '../../reference/expectations.ts';
import { largestDifference, randomModel, randomSeries } from './random-models.ts';

describe('generated kernels', () => {
  for (const n of unrolledSizes) {
    it(`the file for ${n} states is what the generator writes`, () => {
      const path = `../../../shared/numerics/kernels/generated/states-${n}.ts`;
      const file = readFileSync(fileURLToPath(new URL(path, import.meta.url)), 'utf8');
      expect(file).toBe(kernelSource(n));
    });
  }
});

describe('the fast filter gives the readable filter’s results to 9 digits', () => {
  const N = 260;
  for (const n of [...unrolledSizes, 9]) {
    for (const m of [1, 2, 3, 4]) {
      it(`${n} states, ${m} readings, with and without gaps, both ways of holding the gain`, () => {
        for (const missing of [0, 0.2]) {
          const model = randomModel(100 * n + m, n, m, m % 3, {
            feedthrough: n % 2 === 0,
            correlated: m === 3,
          });
          const series = randomSeries(n + m, N, m, m % 3, missing);
          const readable = answered(kalmanFilter(model, model, model, series));
          for (const switching of [true, false]) {
            const fast = answered(filterSeries(model, model, model, series, { switching }));
            expect(largestDifference(fast.z, readable.z)).toBeLessThan(1e-9);
            expect(largestDifference(fast.sd, readable.sd)).toBeLessThan(1e-9);
            expect(largestDifference(fast.nis, readable.nis)).toBeLessThan(1e-9);
            expect(Math.abs(fast.logLikelihood / readable.logLikelihood - 1)).toBeLessThan(1e-9);
            expect(fast.readings).toBe(readable.readings);
            if (switching && missing === 0) expect(fast.fixedGainSteps).toBeGreaterThan(0);
            if (!switching) expect(fast.fixedGainSteps).toBe(0);
          }
        }
      });
    }
  }
});
