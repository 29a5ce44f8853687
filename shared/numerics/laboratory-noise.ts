import { attempt, giveUp } from './attempt.ts';
import { readNumber } from './linear-algebra.ts';
import { notEnough } from './result.ts';
import type { Result } from './result.ts';

/**
 * What makes single laboratory results scatter, as SDs in the unit of the quantity: `repeatability` s_r, `sampling` (what
 * two samples of the same moment differ by), and the `ramp` of the quantity (unit/s) times `timeUncertainty` (SD of the
 * sample time, s). `reproducibility` s_R ≥ s_r.
 */
export type LaboratorySpread = {
  repeatability: number;
  reproducibility: number;
  sampling: number;
  ramp: number;
  timeUncertainty: number;
};

/**
 * `variance` R_lab = s_r² + sampling² + (ramp × time uncertainty)², of one result for the filter; `sharedVariance`
 * s_R² − s_r², which all results of one laboratory share: it does not average out, so it stays out of R_lab and is added
 * to the band after fusion (ISO 5725: s_R² = s_r² + s_L²). Refuses `out-of-range` for a negative SD or s_R < s_r.
 */
export function laboratoryVariance(
  spread: LaboratorySpread,
): Result<{ variance: number; sharedVariance: number }> {
  return attempt(() => {
    const read = (field: keyof LaboratorySpread) => {
      const value = readNumber(spread?.[field], field);
      return value < 0 && field !== 'ramp' ? giveUp('out-of-range', { field, figure: value }) : value;
    };
    const sr = read('repeatability');
    const sR = read('reproducibility');
    if (sR < sr) return giveUp('out-of-range', { field: 'reproducibility', figure: sR });
    const timing = read('ramp') * read('timeUncertainty');
    return { variance: sr ** 2 + read('sampling') ** 2 + timing ** 2, sharedVariance: sR ** 2 - sr ** 2 };
  });
}

/** Half-width of the 95 % band after fusion: 1.96 √(sd² + shared), `sd` of the filter, `sharedVariance` of the laboratory. */
export function bandAfterFusion(sd: number, sharedVariance: number): Result<{ halfWidth: number }> {
  return attempt(() => {
    for (const [field, value] of Object.entries({ sd, sharedVariance })) {
      if (readNumber(value, field) < 0) giveUp('out-of-range', { field, figure: value });
    }
    return { halfWidth: 1.96 * Math.sqrt(sd * sd + sharedVariance) };
  });
}

/** Samples that neither fitted nor fed the filter: its error there and the SD that was expected of that error. */
export type UnusedSample = { error: number; expectedSd: number };

/** Fewest unused samples on which the coverage of a band is judged. */
export const fewestForCoverage = 20;

/** Share of unused samples inside their 95 % band below which the band is widened. */
const lowestCoverage = 0.9;

/**
 * Coverage of the 95 % band on unused samples. Where fewer than 90 % lie inside, `factor` > 1 is what the band has to be
 * multiplied by so that 95 % of these samples lie inside (order statistic ⌈0.95 n⌉ of |error|/(1.96 expected SD)), and
 * `widened` says so; else factor 1. Refuses `not-enough-data` below {@link fewestForCoverage} samples.
 */
export function bandCoverage(
  samples: UnusedSample[],
): Result<{ n: number; inside: number; coverage: number; factor: number; widened: boolean }> {
  return attempt(() => {
    if (!Array.isArray(samples)) return giveUp('wrong-shape', { field: 'samples' });
    const n = samples.length;
    const few = notEnough('samples', fewestForCoverage, n);
    if (n < fewestForCoverage) return giveUp(few.reason, few);
    const ratios = samples.map((sample, i) => {
      const sd = readNumber(sample?.expectedSd, `samples[${i}].expectedSd`);
      if (!(sd > 0)) return giveUp('no-spread', { field: `samples[${i}].expectedSd` });
      return Math.abs(readNumber(sample.error, `samples[${i}].error`)) / (1.96 * sd);
    });
    const inside = ratios.filter((ratio) => ratio <= 1).length;
    const needed = ratios.sort((a, b) => a - b)[Math.ceil(0.95 * n) - 1]!;
    const widened = inside / n < lowestCoverage;
    return { n, inside, coverage: inside / n, factor: widened ? needed : 1, widened };
  });
}
