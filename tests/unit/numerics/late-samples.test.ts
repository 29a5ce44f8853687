import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { withBiasState } from '../../../shared/numerics/bias-state.ts';
import { filterSeries } from '../../../shared/numerics/filter-run.ts';
import { kalmanFilter } from '../../../shared/numerics/kalman.ts';
import {
  bandAfterFusion,
  bandCoverage,
  laboratoryVariance,
} from '../../../shared/numerics/laboratory-noise.ts';
import { filterWithLateSamples } from '../../../shared/numerics/late-samples.ts';
import type { LateSample } from '../../../shared/numerics/late-samples.ts';
import { steadyFilter } from '../../../shared/numerics/riccati.ts';
import { answered } from '../../reference/expectations.ts';
import { largestDifference, normal, randomModel, randomSeries, uniform } from './random-models.ts';

function randomSamples(seed: number, count: number, N: number): LateSample[] {
  const next = uniform(seed + 5);
  return Array.from({ length: count }, () => {
    const takenAt = Math.floor(next() * N);
    const delay = next() < 0.2 ? 0 : Math.floor(next() * N * 0.3);
    return { takenAt, reportedAt: takenAt + delay, value: 4 * next() - 2, variance: 0.05 + next() };
  });
}

describe('laboratory samples that are reported late', () => {
  it('from reportedAt on equal the run in which they had arrived on time; before, nothing changes', () => {
    fc.assert(
      fc.property(fc.integer({ min: 1, max: 100_000 }), fc.integer({ min: 1, max: 12 }), (seed, count) => {
        const model = randomModel(seed, 3, 2, 1);
        const N = 300;
        const series = randomSeries(seed, N, 2, 1, 0.1);
        const samples = randomSamples(seed, count, N);
        const known = samples.filter((sample) => sample.reportedAt < N);
        const late = answered(filterWithLateSamples(model, model, model, series, samples));
        const timely = answered(
          filterWithLateSamples(
            model,
            model,
            model,
            series,
            known.map((s) => ({ ...s, reportedAt: s.takenAt })),
          ),
        );
        const last = Math.max(0, ...known.map((s) => s.reportedAt + (s.reportedAt === s.takenAt ? 1 : 0)));
        expect(largestDifference(late.z.slice(last), timely.z.slice(last))).toBeLessThan(1e-9);
        expect(largestDifference(late.sd.slice(last), timely.sd.slice(last))).toBeLessThan(1e-9);
        expect(largestDifference(late.revised.z, timely.revised.z)).toBeLessThan(1e-9);
        expect(Math.abs(late.logLikelihood - timely.logLikelihood)).toBeLessThan(1e-7);
        expect(late.readings).toBe(timely.readings);
        const first = Math.min(N, ...known.map((s) => s.reportedAt + (s.reportedAt === s.takenAt ? 1 : 0)));
        const without = answered(filterSeries(model, model, model, series));
        expect(largestDifference(late.z.slice(0, first), without.z.slice(0, first))).toBeLessThan(1e-12);
        samples.forEach((sample, i) => expect(late.samples[i] === null).toBe(sample.reportedAt >= N));
      }),
      { numRuns: 60 },
    );
  });

  it('equal the readable filter with the sample as one more reading', () => {
    const model = randomModel(5, 3, 1, 0);
    const series = randomSeries(5, 60, 1, 0);
    const sample = { takenAt: 20, reportedAt: 35, value: 1.5, variance: 0.2 };
    const late = answered(filterWithLateSamples(model, model, model, series, [sample]));
    const more = {
      ...model,
      C: [model.C[0]!, model.H[0]!],
      D: undefined,
      R: [
        [model.R[0]![0]!, 0],
        [0, sample.variance],
      ],
    };
    const y = Float64Array.from(series.y).reduce<number[]>(
      (rows, v, k) => [...rows, v, k === 20 ? sample.value : NaN],
      [],
    );
    const joint = answered(kalmanFilter(more, more, more, { u: series.u, y: Float64Array.from(y) }));
    expect(largestDifference(late.z.slice(35), joint.z.slice(35))).toBeLessThan(1e-10);
    expect(largestDifference(late.revised.z, joint.z)).toBeLessThan(1e-10);
    expect(Math.abs(late.logLikelihood - joint.logLikelihood)).toBeLessThan(1e-9);
  });

  it('compares a sample with the estimate as recorded before it entered', () => {
    const model = randomModel(8, 2, 1, 0);
    const series = randomSeries(8, 40, 1, 0);
    const sample = { takenAt: 12, reportedAt: 30, value: 0.7, variance: 0.1 };
    const run = answered(filterWithLateSamples(model, model, model, series, [sample]));
    const without = answered(filterSeries(model, model, model, series));
    expect(run.samples[0]!.step).toBe(12);
    expect(run.samples[0]!.estimate).toBe(without.z[12]);
    expect(run.samples[0]!.innovation).toBeCloseTo(0.7 - without.z[12]!, 12);
    expect(run.stepsRepeated).toBe(17);
  });

  it.each([
    [{ takenAt: -1, reportedAt: 3, value: 1, variance: 1 }, 'out-of-range', 'samples[0].takenAt'],
    [{ takenAt: 5, reportedAt: 3, value: 1, variance: 1 }, 'out-of-range', 'samples[0].reportedAt'],
    [{ takenAt: 5, reportedAt: 6, value: NaN, variance: 1 }, 'non-finite-input', 'samples[0].value'],
    [{ takenAt: 5, reportedAt: 6, value: 1, variance: 0 }, 'out-of-range', 'samples[0].variance'],
    [{ takenAt: 5, reportedAt: 6, value: 1, variance: 1, row: [1] }, 'wrong-shape', 'samples[0].row'],
  ])('refuses %o', (sample, reason, field) => {
    const model = randomModel(8, 2, 1, 0);
    const result = filterWithLateSamples(model, model, model, randomSeries(8, 40, 1, 0), [sample]);
    expect(result).toMatchObject({ ok: false, reason, field });
  });
});

describe('bias state', () => {
  const model = {
    A: [
      [0.9, 0.05],
      [0.1, 0.85],
    ],
    C: [[0, 1]],
    H: [[1, 0]],
  };
  const noise = {
    Q: [
      [0.01, 0],
      [0, 0.01],
    ],
    R: [[0.04]],
  };
  const offset = { intoStates: [0, 0], intoOutputs: [1], variance: 1e-5 };

  it('of a sensor is found out by laboratory samples of the state that the sensor reads', () => {
    const grown = answered(withBiasState(model, noise, offset, { row: [0, 1], bias: 0 }));
    const next = normal(3);
    let x: number[] = [0, 0];
    const N = 6000;
    const y = new Float64Array(N);
    const samples: LateSample[] = [];
    for (let k = 0; k < N; k++) {
      y[k] = x[1]! + 0.8 + 0.2 * next();
      if (k % 120 === 60)
        samples.push({
          takenAt: k,
          reportedAt: k + 30,
          value: x[1]! + 0.1 * next(),
          variance: 0.01,
          row: grown.laboratoryRow!,
        });
      x = model.A.map((row, i) => row[0]! * x[0]! + row[1]! * x[1]! + 0.1 * next() * (i >= 0 ? 1 : 0));
    }
    const bias = { ...grown.model, H: [[0, 0, 1]] };
    const start = {
      x0: [0, 0, 0],
      P0: [
        [1, 0, 0],
        [0, 1, 0],
        [0, 0, 1],
      ],
    };
    const run = answered(
      filterWithLateSamples(bias, { Q: grown.Q, R: noise.R }, start, { u: new Float64Array(0), y }, samples),
    );
    expect(Math.abs(run.z[N - 1]! - 0.8)).toBeLessThan(3 * run.sd[N - 1]!);
    expect(run.sd[N - 1]!).toBeLessThan(0.1);
  });

  it('is refused where a constant bias can’t be told from a constant state', () => {
    const integrator = { A: [[1]], C: [[1]] };
    const bias = { intoStates: [0], intoOutputs: [1], variance: 0.01 };
    const alone = withBiasState(integrator, { Q: [[0.1]] }, bias);
    expect(alone).toMatchObject({ ok: false, reason: 'not-observable', field: 'bias', needed: 2, got: 1 });
    const referred = withBiasState(integrator, { Q: [[0.1]] }, bias, { row: [1], bias: 0 });
    expect(referred.ok).toBe(true);
    const biasedLaboratory = withBiasState(integrator, { Q: [[0.1]] }, bias, { row: [1], bias: 1 });
    expect(biasedLaboratory).toMatchObject({ ok: false, reason: 'not-observable', field: 'bias' });
  });

  it('without its reference has no steady state and its band grows without limit', () => {
    const grown = answered(
      withBiasState(
        { A: [[1]], C: [[1]] },
        { Q: [[0.1]] },
        { intoStates: [0], intoOutputs: [1], variance: 0.01 },
        { row: [1], bias: 0 },
      ),
    );
    expect(steadyFilter({ ...grown.model, Q: grown.Q, R: [[1]] })).toMatchObject({
      reason: 'not-detectable',
      field: 'C',
    });
    const start = {
      x0: [0, 0],
      P0: [
        [1, 0],
        [0, 1],
      ],
    };
    const run = answered(
      filterSeries({ ...grown.model, H: [[0, 1]] }, { Q: grown.Q, R: [[1]] }, start, {
        u: new Float64Array(0),
        y: new Float64Array(4000),
      }),
    );
    expect(run.sd[3999]!).toBeGreaterThan(2 * run.sd[400]!);
  });
});

describe('noise of laboratory results', () => {
  const spread = {
    repeatability: 0.3,
    reproducibility: 0.5,
    sampling: 0.4,
    ramp: 2 / 3600,
    timeUncertainty: 900,
  };

  it('adds repeatability, sampling and timing; keeps what all results share apart', () => {
    const { variance, sharedVariance } = answered(laboratoryVariance(spread));
    expect(variance).toBeCloseTo(0.09 + 0.16 + 0.25, 12);
    expect(sharedVariance).toBeCloseTo(0.16, 12);
    expect(answered(bandAfterFusion(0.3, sharedVariance)).halfWidth).toBeCloseTo(1.96 * 0.5, 12);
  });

  it('refuses a reproducibility below the repeatability', () => {
    const result = laboratoryVariance({ ...spread, reproducibility: 0.2 });
    expect(result).toMatchObject({ ok: false, reason: 'out-of-range', field: 'reproducibility' });
  });

  it('widens a band that covers less than 90 % of unused samples and says so', () => {
    const next = normal(9);
    const errors = Array.from({ length: 400 }, () => next());
    const honest = answered(bandCoverage(errors.map((error) => ({ error, expectedSd: 1 }))));
    expect(honest).toMatchObject({ widened: false, factor: 1 });
    expect(honest.coverage).toBeGreaterThan(0.9);
    const hopeful = answered(bandCoverage(errors.map((error) => ({ error, expectedSd: 0.5 }))));
    expect(hopeful.widened).toBe(true);
    expect(hopeful.factor).toBeGreaterThan(1.7);
    expect(hopeful.factor).toBeLessThan(2.3);
  });

  it('wants 20 samples before it judges', () => {
    const few = bandCoverage(Array.from({ length: 19 }, () => ({ error: 0, expectedSd: 1 })));
    expect(few).toMatchObject({ ok: false, reason: 'not-enough-data', needed: 20, got: 19 });
  });
});
