import { describe, expect, it } from 'vitest';
import { dominantSettling, errorNorms, settlingSteps } from '../../../shared/numerics/error-decay.ts';
import { settlingPoles } from '../../../shared/numerics/gain-placement.ts';
import { matrixExponential } from '../../../shared/numerics/matrix-exponential.ts';
import { answered } from '../../reference/expectations.ts';

describe('settling time', () => {
  it('of two and three equal modes is 5.83 and 7.52 time constants, not ln 50 = 3.91', () => {
    const dt = 1e-3;
    const chain = (n: number) =>
      Array.from({ length: n }, (_, i) =>
        Array.from({ length: n }, (__, j) => (i === j ? -1 : j === i - 1 ? 1 : 0)),
      );
    // Error of the last of n equal lags after a unit step of its input, all of them one unit off at the start.
    for (const [n, expected] of [
      [1, Math.log(50)],
      [2, 5.83],
      [3, 7.52],
    ] as const) {
      const M = answered(matrixExponential(chain(n).map((row) => row.map((v) => v * dt)))).exponential;
      let e = Array<number>(n).fill(1);
      let settled = 0;
      for (let k = 1; k < 20_000; k++) {
        e = M.map((row) => row.reduce((sum, a, j) => sum + a * e[j]!, 0));
        if (Math.abs(e[n - 1]!) > 0.02) settled = k * dt;
      }
      expect(Math.abs(settled - expected)).toBeLessThan(0.005);
    }
  });

  it('that was asked for is what the error of a chain of lags takes', () => {
    for (const count of [1, 2, 3, 4]) {
      const { poles } = answered(
        settlingPoles({ count, settling: 100, damping: 1 }, { domain: 'continuous' }),
      );
      const slowest = Math.max(...poles.map((pole) => pole.re));
      expect(Math.log(50) / -slowest).toBeLessThanOrEqual(100.2);
      expect(poles).toHaveLength(count);
    }
  });

  it('is read from the simulated norm, which the slowest mode alone understates', () => {
    const M = [
      [0.9, 1],
      [0, 0.9],
    ];
    const read = answered(settlingSteps(M, [0, 1])).steps;
    const dominant = answered(dominantSettling(M, { domain: 'discrete', step: 1 })).settling;
    expect(read).toBeGreaterThan(1.4 * dominant);
    const { norms } = answered(errorNorms(M, [0, 1], read + 1));
    expect(norms[read]!).toBeLessThanOrEqual(0.02);
    expect(norms[read - 1]!).toBeGreaterThan(0.02);
  });

  it('refuses a sampling interval longer than half the fastest wanted time constant, and says how long it may be', () => {
    const wanted = { count: 3, settling: 600, damping: 0.7 };
    const result = settlingPoles(wanted, { domain: 'discrete', step: 70 });
    expect(result).toMatchObject({ ok: false, reason: 'too-slow-sampling', field: 'step' });
    const longest = (result as { figure: number }).figure;
    expect(settlingPoles(wanted, { domain: 'discrete', step: longest * 0.999 }).ok).toBe(true);
  });
});
