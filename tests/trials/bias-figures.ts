import { biasWithInterval, lag1Autocorrelation } from '../../shared/numerics/bias.ts';
import { individualsLimits } from '../../shared/numerics/control-charts.ts';
import { meanOf, sdOf } from '../../shared/numerics/descriptive.ts';
import { tQuantile } from '../../shared/numerics/distributions.ts';
import { exponentialUpdate } from '../../shared/numerics/exponential-update.ts';
import { steadyStateTest } from '../../shared/numerics/steady-state.ts';
import { mannKendall } from '../../shared/numerics/trend.ts';
import { autoregression, seededRandom } from './seeded-random.ts';
import { near } from './trial.ts';
import type { Trial } from './trial.ts';

const shareError = (share: number, count: number) => Math.sqrt((share * (1 - share)) / count);

/** Coverage of the interval of the bias with 8 errors of φ = 0.3: shrunk r₁ against raw r₁. */
const biasCoverage: Trial = {
  name: '95 % interval of the bias at n = 8, φ 0.3: covers 96 %, with raw r₁ 85 %',
  run(seed, size = 1) {
    const random = seededRandom(seed);
    const count = Math.ceil(40_000 * size);
    let shrunk = 0;
    let raw = 0;
    for (let i = 0; i < count; i++) {
      const errors = autoregression(random, 8, 0.3);
      const judged = biasWithInterval(errors);
      if (judged.ok && judged.low <= 0 && judged.high >= 0) shrunk++;
      const correlation = lag1Autocorrelation(errors);
      const r1 = correlation.ok ? correlation.r1 : 0;
      const effectiveN = (8 * (1 - r1)) / (1 + r1);
      if (Math.abs(meanOf(errors)) <= (tQuantile(0.975, 7) * sdOf(errors)) / Math.sqrt(effectiveN)) raw++;
    }
    const figures = { shrunk: shrunk / count, raw: raw / count };
    const error = shareError(0.9, count);
    return {
      figures,
      agrees: near(figures.shrunk, 0.96, 0.01, error) && near(figures.raw, 0.85, 0.01, error),
    };
  },
};

/** Where the shrinkage reaches its limits: stronger autocorrelation than it expects. */
const biasCoverageBeyond: Trial = {
  name: 'the same interval at φ 0.6, n = 15: covers 85 %, so strong autocorrelation is not fully allowed for',
  run(seed, size = 1) {
    const random = seededRandom(seed);
    const count = Math.ceil(20_000 * size);
    let covered = 0;
    for (let i = 0; i < count; i++) {
      const judged = biasWithInterval(autoregression(random, 15, 0.6));
      if (judged.ok && judged.low <= 0 && judged.high >= 0) covered++;
    }
    const figures = { covered: covered / count };
    return { figures, agrees: near(figures.covered, 0.85, 0.01, shareError(0.85, count)) };
  },
};

const movingRangeBias: Trial = {
  name: 'σ from moving ranges understates by √(1 − φ)',
  run(seed, size = 1) {
    const random = seededRandom(seed);
    const count = Math.ceil(400 * size);
    let sum = 0;
    for (let i = 0; i < count; i++) {
      const limits = individualsLimits(autoregression(random, 400, 0.3));
      sum += limits.ok ? limits.sigma : 0;
    }
    const figures = { ratio: sum / count, expected: Math.sqrt(0.7) };
    return { figures, agrees: near(figures.ratio, figures.expected, 0.005, 0.04 / Math.sqrt(count)) };
  },
};

const dailyTrendTest: Trial = {
  name: 'Mann-Kendall at 5 % tested daily finds a trend in every healthy year',
  run(seed, size = 1) {
    const random = seededRandom(seed);
    const years = Math.max(3, Math.ceil(40 * size));
    let found = 0;
    for (let year = 0; year < years; year++) {
      const errors = autoregression(random, 400 + 1095, 0.3);
      for (let day = 1; day <= 365; day++) {
        const test = mannKendall(errors.subarray(3 * day, 3 * day + 400));
        if (!test.ok || test.p >= 0.05) continue;
        found++;
        break;
      }
    }
    return { figures: { share: found / years }, agrees: found / years >= 0.95 };
  },
};

const updateNoise: Trial = {
  name: 'an exponential update of noise alone puts √(λ/(2 − λ)) SD on the estimate, r₁ of the corrected errors is −λ/2',
  run(seed, size = 1) {
    const raw = autoregression(seededRandom(seed), Math.ceil(200_000 * size), 0);
    const figures: Record<string, number> = {};
    let agrees = true;
    for (const [lambda, noise] of [
      [1, 1],
      [0.5, 0.58],
      [0.3, 0.42],
      [0.2, 0.33],
      [0.1, 0.23],
    ] as const) {
      const updated = exponentialUpdate(raw, lambda);
      if (!updated.ok) return { figures, agrees: false };
      const correlation = lag1Autocorrelation(updated.correctedErrors);
      figures[`noise at ${lambda}`] = sdOf(updated.correctionBefore);
      figures[`r1 at ${lambda}`] = correlation.ok ? correlation.r1 : NaN;
      const error = 3 / Math.sqrt(raw.length);
      agrees &&= near(figures[`noise at ${lambda}`]!, noise, 0.01, error);
      agrees &&= near(figures[`r1 at ${lambda}`]!, -lambda / 2, 0.005, error);
    }
    return { figures, agrees };
  },
};

const steadyStateRatio: Trial = {
  name: 'the steady-state ratio of white noise exceeds 1.44 in 5 % of readings',
  run(seed, size = 1) {
    const readings = autoregression(seededRandom(seed), Math.ceil(400_000 * size), 0);
    const test = steadyStateTest(readings);
    const points = test.ok ? test.points.slice(200) : [];
    const share = points.filter(({ steady }) => !steady).length / points.length;
    return { figures: { share }, agrees: near(share, 0.05, 0.003, 3 * shareError(0.05, points.length)) };
  },
};

export const biasTrials: Trial[] = [
  biasCoverage,
  biasCoverageBeyond,
  movingRangeBias,
  dailyTrendTest,
  updateNoise,
  steadyStateRatio,
];
