import { describe, expect, it } from 'vitest';
import { discretise } from '../../../shared/numerics/discretise.ts';
import { errorNorms } from '../../../shared/numerics/error-decay.ts';
import { filterSeries } from '../../../shared/numerics/filter-run.ts';
import { placeGain, settlingPoles } from '../../../shared/numerics/gain-placement.ts';
import { gainQuality } from '../../../shared/numerics/gain-quality.ts';
import { matrixExponential } from '../../../shared/numerics/matrix-exponential.ts';
import { runObserver } from '../../../shared/numerics/observer.ts';
import { answered } from '../../reference/expectations.ts';
import { wall, sampled, noise, inputs, simulate, gainFor } from './furnace-wall.ts';

// Common practice, no source.
describe('facts of the trade', () => {
  const N = 2500;
  const truth = [820, 430, 130];
  const u = inputs(N);
  const { y, states } = simulate(sampled, truth, u);
  const { predictorGain } = gainFor(6);
  const errorMatrix = sampled.A.map((row, i) =>
    row.map((a, j) => a - predictorGain[i]![0]! * sampled.C[0]![j]!),
  );

  it('with a perfect model and the right start the innovation stays zero', () => {
    const start = {
      x0: truth,
      P0: [
        [1, 0, 0],
        [0, 1, 0],
        [0, 0, 1],
      ],
    };
    const run = answered(filterSeries(sampled, noise, start, { u, y }, { innovations: true }));
    expect(Math.max(...run.innovations.map(Math.abs))).toBeLessThan(1e-9);
  });

  it('with a wrong start the error follows (A − K C)ᵏ e₀ and vanishes', () => {
    const run = answered(
      runObserver(sampled, { form: 'predictor', gain: predictorGain }, [700, 400, 100], { u, y }),
    );
    let e = [700 - 820, 400 - 430, 100 - 130];
    for (let k = 0; k < N; k++) {
      expect(Math.abs(run.z[k]! - states[k]![0]! - e[0]!)).toBeLessThan(1e-8);
      e = errorMatrix.map((row) => row.reduce((sum, a, j) => sum + a * e[j]!, 0));
    }
    expect(Math.abs(run.z[N - 1]! - states[N - 1]![0]!)).toBeLessThan(1e-6);
  });

  it('the same in continuous time: exp((A − KC)t) e₀ vanishes when all eigenvalues have a negative real part', () => {
    const { poles } = answered(settlingPoles({ count: 3, settling: 6 * 3600, damping: 0.8 }, wall));
    const K = answered(placeGain(wall, poles)).predictorGain;
    const M = wall.A.map((row, i) => row.map((a, j) => (a - K[i]![0]! * wall.C[0]![j]!) * 3600));
    const after = (hours: number) =>
      Math.hypot(
        ...answered(matrixExponential(M.map((row) => row.map((v) => v * hours)))).exponential.flat(),
      );
    expect(after(30)).toBeLessThan(1e-4);
    expect(after(60)).toBeLessThan(after(30));
  });

  it('without feedback the error decays only as the model itself does', () => {
    const run = answered(
      runObserver(sampled, { form: 'predictor', gain: [[0], [0], [0]] }, [700, 400, 100], { u, y }),
    );
    const norms = answered(errorNorms(sampled.A as number[][], [-120, -30, -30], N - 1)).norms;
    const error = Math.abs(run.z[600]! - states[600]![0]!);
    expect(error).toBeGreaterThan(1);
    expect(error).toBeLessThan(norms[600]!);
  });

  it('without feedback and with an uncertain model the error does not vanish', () => {
    const { model } = answered(
      discretise({ ...wall, B: wall.B.map((row, i) => (i === 0 ? row.map((b) => 0.9 * b) : row)) }, 60),
    );
    const open = answered(runObserver(model, { form: 'predictor', gain: [[0], [0], [0]] }, truth, { u, y }));
    expect(Math.abs(open.z[N - 1]! - states[N - 1]![0]!)).toBeGreaterThan(20);
  });

  it('a larger gain decays faster and passes more noise', () => {
    const slowToFast = [12, 6, 3].map((hours) =>
      answered(gainQuality(sampled, noise, gainFor(hours).filterGain!)),
    );
    for (const [slow, fast] of [slowToFast.slice(0, 2), slowToFast.slice(1)] as const) {
      expect(fast!.settling).toBeLessThan(slow!.settling);
      expect(fast!.noiseSd[0]!).toBeGreaterThan(slow!.noiseSd[0]!);
    }
  });
});
