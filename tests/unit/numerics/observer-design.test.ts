import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { discretise } from '../../../shared/numerics/discretise.ts';
import { dominantSettling, errorNorms, settlingSteps } from '../../../shared/numerics/error-decay.ts';
import { filterSeries } from '../../../shared/numerics/filter-run.ts';
import { placeGain, settlingPoles } from '../../../shared/numerics/gain-placement.ts';
import { gainQuality } from '../../../shared/numerics/gain-quality.ts';
import { discretiseWithDeadTime, firstOrderLag } from '../../../shared/numerics/lags.ts';
import { matrixExponential } from '../../../shared/numerics/matrix-exponential.ts';
import { noiseReach, observability } from '../../../shared/numerics/observability.ts';
import { runObserver } from '../../../shared/numerics/observer.ts';
import { steadyFilter } from '../../../shared/numerics/riccati.ts';
import { mixedTanks } from '../../../shared/numerics/tanks.ts';
import { thermalNetwork } from '../../../shared/numerics/thermal-network.ts';
import { answered, expectAllRelative } from '../../reference/expectations.ts';
import { largestDifference, randomModel, randomSeries } from './random-models.ts';

const wall = answered(
  thermalNetwork({
    unit: '°C',
    nodes: [
      { name: 'hot face', heatCapacity: 3e5 },
      { name: 'middle', heatCapacity: 4e5 },
      { name: 'shell', heatCapacity: 2e5 },
    ],
    boundaries: [{ name: 'gas' }, { name: 'air' }],
    links: [
      { between: ['gas', 'hot face'], conductance: 40 },
      { between: ['hot face', 'middle'], conductance: 12 },
      { between: ['middle', 'shell'], conductance: 12 },
      { between: ['shell', 'air'], conductance: 15 },
    ],
    heats: [],
    measured: ['shell'],
    estimated: ['hot face'],
  }),
).model;
const { model: sampled } = answered(discretise(wall, 60));
const noise = {
  Q: [
    [4, 0, 0],
    [0, 1, 0],
    [0, 0, 1],
  ],
  R: [[0.25]],
};
const inputs = (N: number) =>
  Float64Array.from({ length: 2 * N }, (_, i) => (i % 2 ? 25 : 900 + 50 * Math.sin(i / 99)));

/** Runs the plant x[k+1] = A x + B u itself and returns its readings and states. */
function simulate(
  model: {
    A: readonly (readonly number[])[];
    B: readonly (readonly number[])[];
    C: readonly (readonly number[])[];
  },
  x0: number[],
  u: Float64Array,
) {
  const p = model.B[0]!.length;
  const N = u.length / p;
  const y: number[] = [];
  const states: number[][] = [];
  let x = x0;
  for (let k = 0; k < N; k++) {
    states.push(x);
    model.C.forEach((row) => y.push(row.reduce((sum, c, i) => sum + c * x[i]!, 0)));
    x = model.A.map((row, i) => {
      const own = row.reduce((sum, a, j) => sum + a * x[j]!, 0);
      return own + model.B[i]!.reduce((sum, b, j) => sum + b * u[k * p + j]!, 0);
    });
  }
  return { y: Float64Array.from(y), states };
}

const gainFor = (hours: number) => {
  const { poles } = answered(settlingPoles({ count: 3, settling: hours * 3600, damping: 0.8 }, sampled));
  return answered(placeGain(sampled, poles));
};

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

describe('what can be seen', () => {
  const blind = answered(
    thermalNetwork({
      unit: '°C',
      nodes: [
        { name: 'seen', heatCapacity: 1000 },
        { name: 'apart', heatCapacity: 2000 },
      ],
      boundaries: [{ name: 'air' }],
      links: [
        { between: ['seen', 'air'], conductance: 2 },
        { between: ['apart', 'air'], conductance: 0.5 },
      ],
      heats: [],
      measured: ['seen'],
      estimated: ['apart'],
    }),
  ).model;

  it('names the state that no output sees and how fast it decays by itself', () => {
    const report = answered(observability(blind));
    const hidden = report.modes.find((mode) => !mode.observable)!;
    expect(report).toMatchObject({ rank: 1, states: 2, observable: false, detectable: true });
    expect(blind.states[hidden.states[0]!.state]!.name).toBe('apart');
    expect(hidden.states).toHaveLength(1);
    expect(hidden.timeConstant).toBeCloseTo(4000, 6);
    expect(report.modes.find((mode) => mode.observable)!.timeConstant).toBeCloseTo(500, 6);
  });

  it('moves only the poles that can be moved, and asks for as many', () => {
    const { model } = answered(discretise(blind, 20));
    expect(
      placeGain(model, [
        { re: 0.5, im: 0 },
        { re: 0.4, im: 0 },
      ]),
    ).toMatchObject({ reason: 'wrong-shape', field: 'poles', needed: 1 });
    const placed = answered(placeGain(model, [{ re: 0.5, im: 0 }]));
    expectAllRelative(placed.poles.map((pole) => pole.re).sort(), [0.5, Math.exp(-20 / 4000)], 1e-9);
    expect(placed.unmoved[0]!.re).toBeCloseTo(Math.exp(-20 / 4000), 12);
    expect(placed.predictorGain[1]).toEqual([0]);
  });

  it('refuses a hidden mode that does not decay', () => {
    const A = [
      [0.9, 0],
      [0, 1],
    ];
    expect(placeGain({ A, C: [[1, 0]], domain: 'discrete', step: 1 }, [{ re: 0.5, im: 0 }])).toMatchObject({
      reason: 'not-detectable',
      field: 'C',
    });
    expect(placeGain({ A, C: [[0, 0]], domain: 'discrete', step: 1 }, [])).toMatchObject({
      reason: 'not-observable',
      field: 'C',
    });
    const steady = {
      A,
      C: [[1, 0]],
      Q: [
        [1, 0],
        [0, 1],
      ],
      R: [[1]],
    };
    expect(steadyFilter(steady)).toMatchObject({ reason: 'not-detectable', field: 'C' });
    expect(
      steadyFilter({
        ...steady,
        C: [[1, 1]],
        Q: [
          [1, 0],
          [0, 0],
        ],
      }),
    ).toMatchObject({ reason: 'not-controllable', field: 'Q' });
    const reach = answered(
      noiseReach({
        A,
        Q: [
          [1, 0],
          [0, 0],
        ],
        domain: 'discrete',
        step: 1,
      }),
    );
    expect(reach.detectable).toBe(false);
  });

  it('does not depend on the unit of time or of the states', () => {
    fc.assert(
      fc.property(fc.integer({ min: 1, max: 10_000 }), fc.integer({ min: 2, max: 6 }), (seed, n) => {
        const { A, C } = randomModel(seed, n, 1, 0);
        const plain = answered(observability({ A, C, domain: 'continuous' }));
        const slow = answered(
          observability({ A: A.map((row) => row.map((a) => a * 1e-5)), C, domain: 'continuous' }),
        );
        const s = Array.from({ length: n }, (_, i) => 10 ** ((seed + i) % 3));
        const scaled = A.map((row, i) => row.map((a, j) => (s[i]! * a) / s[j]!));
        const other = answered(
          observability({ A: scaled, C: C.map((row) => row.map((c, i) => c / s[i]!)), domain: 'continuous' }),
        );
        expect([slow.rank, other.rank]).toEqual([plain.rank, plain.rank]);
        expectAllRelative(slow.singularValues, plain.singularValues, 1e-8, 1e-12);
      }),
      { numRuns: 60 },
    );
  });
});

describe('gains', () => {
  it('random systems get the poles that were asked for, one output or several', () => {
    fc.assert(
      fc.property(
        fc.integer({ min: 1, max: 10_000 }),
        fc.integer({ min: 1, max: 6 }),
        fc.integer({ min: 1, max: 3 }),
        (seed, n, m) => {
          const model = randomModel(seed, n, m, 0);
          const poles = Array.from({ length: n }, (_, i) => ({ re: 0.1 + 0.12 * i, im: 0 }));
          const result = placeGain({ ...model, domain: 'discrete', step: 1 }, poles);
          if (!result.ok) {
            expect(['ill-conditioned', 'singular', 'wrong-shape']).toContain(result.reason);
            return;
          }
          expect(result.miss).toBeLessThan(1e-6);
        },
      ),
      { numRuns: 80 },
    );
  });

  it('delayed inputs are known: their gain stays 0 and a singular A is no obstacle', () => {
    const ends = { input: { name: 'valve', unit: '%' }, output: { name: 'temperature', unit: '°C' } };
    const lag = answered(firstOrderLag({ ...ends, gain: 2, timeConstant: 300 })).model;
    const { model, exactStates } = answered(discretiseWithDeadTime(lag, 30, [100]));
    const placed = answered(placeGain(model, [{ re: 0.6, im: 0 }], exactStates));
    expect(placed.filterGain!.slice(1).flat()).toEqual([0, 0, 0, 0]);
    const moduli = placed.poles.map((pole) => Math.hypot(pole.re, pole.im)).sort();
    expect(moduli[4]!).toBeCloseTo(0.6, 12);
    expect(moduli[3]!).toBeLessThan(1e-3);
  });

  it('of the Riccati equation spreads the error less than any other', () => {
    const best = answered(steadyFilter({ ...sampled, ...noise }));
    const optimal = answered(gainQuality(sampled, noise, best.filterGain));
    expectAllRelative(optimal.covariance.flat(), best.filteredCovariance.flat(), 1e-9);
    for (const hours of [3, 6, 12]) {
      expect(answered(gainQuality(sampled, noise, gainFor(hours).filterGain!)).sd[0]!).toBeGreaterThan(
        optimal.sd[0]!,
      );
    }
  });

  it('responses start where they must and end at rest', () => {
    const quality = answered(gainQuality(sampled, noise, gainFor(6).filterGain!));
    expect(quality.initialErrorResponses.map((trace) => trace[0]!)).toEqual([1, 0, 0]);
    for (const trace of quality.initialErrorResponses) expect(Math.abs(trace[120]!)).toBeLessThan(0.02);
    const end = quality.readingStepResponses[0]!.slice(-2);
    expect(Math.abs(end[1]! - end[0]!)).toBeLessThan(0.01 * Math.abs(end[1]!));
    expect(quality.times[120]!).toBeGreaterThanOrEqual(2 * quality.settling);
  });

  it('refuses an unstable gain with the modulus at fault', () => {
    const result = gainQuality(sampled, noise, [[0], [0], [3]]);
    expect(result).toMatchObject({ ok: false, reason: 'unstable', field: 'filterGain' });
    expect((result as { figure: number }).figure).toBeGreaterThan(1);
    const run = runObserver(sampled, { form: 'filter', gain: [[0], [0], [3]] }, [0, 0, 0], {
      u: inputs(3),
      y: new Float64Array(3),
    });
    expect(run).toMatchObject({ ok: false, reason: 'unstable', field: 'gain' });
  });
});

describe('fixed-gain observer', () => {
  it('equals the filter whose gain has converged', () => {
    const model = randomModel(21, 4, 2, 2);
    const series = randomSeries(21, 800, 2, 2);
    const { filterGain, predictedCovariance } = answered(steadyFilter(model));
    const filter = answered(filterSeries(model, model, { x0: model.x0, P0: predictedCovariance }, series));
    const observer = answered(runObserver(model, { form: 'filter', gain: filterGain }, model.x0, series));
    expect(largestDifference(observer.z, filter.z)).toBeLessThan(1e-9);
  });

  it('runs on by the model where a reading is missing, channel by channel', () => {
    const model = randomModel(22, 3, 2, 1, { feedthrough: true });
    const series = randomSeries(22, 300, 2, 1, 0.3);
    const { filterGain: L } = answered(steadyFilter(model));
    const run = answered(runObserver(model, { form: 'filter', gain: L }, model.x0, series));
    let x = model.x0;
    for (let k = 0; k < 300; k++) {
      const u = series.u[k]!;
      const v = model.C.map((row, j) => {
        const expected = row.reduce((sum, c, i) => sum + c * x[i]!, model.D[j]![0]! * u);
        const y = series.y[2 * k + j]!;
        return Number.isNaN(y) ? 0 : y - expected;
      });
      const filtered = x.map((value, i) => value + L[i]![0]! * v[0]! + L[i]![1]! * v[1]!);
      const z = model.H[0]!.reduce((sum, h, i) => sum + h * filtered[i]!, model.F[0]![0]! * u);
      expect(Math.abs(run.z[k]! - z)).toBeLessThan(1e-9);
      x = model.A.map((row, i) => row.reduce((sum, a, j) => sum + a * filtered[j]!, model.B[i]![0]! * u));
    }
  });
});

describe('plant models refuse what can’t be', () => {
  it('a network with an unknown node, a capacity of zero, a name twice', () => {
    const network = {
      unit: 'K' as const,
      nodes: [{ name: 'a', heatCapacity: 10 }],
      boundaries: [{ name: 'air' }],
      links: [{ between: ['a', 'air'] as [string, string], conductance: 1 }],
      heats: [{ name: 'heater', into: 'a', share: 0.5 }],
      measured: ['a'],
      estimated: ['a'],
    };
    expect(answered(thermalNetwork(network)).model.B).toEqual([[0.1, 0.05]]);
    expect(thermalNetwork({ ...network, links: [{ between: ['a', 'b'], conductance: 1 }] })).toMatchObject({
      reason: 'out-of-range',
      field: 'links[0].between',
    });
    expect(thermalNetwork({ ...network, nodes: [{ name: 'a', heatCapacity: 0 }] })).toMatchObject({
      reason: 'out-of-range',
      field: 'nodes[0].heatCapacity',
    });
    expect(thermalNetwork({ ...network, boundaries: [{ name: 'a' }] })).toMatchObject({
      reason: 'out-of-range',
      field: 'nodes[1].name',
    });
    expect(thermalNetwork({ ...network, measured: ['x'] })).toMatchObject({
      reason: 'out-of-range',
      field: 'measured[0]',
    });
  });

  it('mixed tanks keep a constant feed constant and consume it where there is a reaction', () => {
    const tanks = {
      quantity: { name: 'Brine', unit: 'g/L' },
      volumes: [2, 3],
      flow: 0.01,
      decay: 0,
      estimated: 1,
    };
    const { A, B } = answered(mixedTanks(tanks)).model;
    A.forEach((row, i) => expect(row[0]! + row[1]! + B[i]![0]!).toBeCloseTo(0, 15));
    const reacting = answered(mixedTanks({ ...tanks, decay: 0.002 })).model.A;
    expect(reacting[1]![1]! - A[1]![1]!).toBeCloseTo(-0.002, 15);
    expect(mixedTanks({ ...tanks, volumes: [2, -3] })).toMatchObject({
      reason: 'out-of-range',
      field: 'volumes[1]',
    });
  });
});
