import fc from 'fast-check';
import { Matrix, solve } from 'ml-matrix';
import { describe, expect, it } from 'vitest';
import { zeroOrderHold } from '../../../shared/numerics/discretise.ts';
import { filterSeries } from '../../../shared/numerics/filter-run.ts';
import { kalmanFilter } from '../../../shared/numerics/kalman.ts';
import { smooth } from '../../../shared/numerics/smoother.ts';
import { squareRootFilter } from '../../../shared/numerics/square-root-filter.ts';
import { thermalNetwork } from '../../../shared/numerics/thermal-network.ts';
import { answered } from '../../reference/expectations.ts';
import { largestDifference, randomModel, randomSeries } from './random-models.ts';
import type { RandomModel } from './random-models.ts';

const seeds = fc.integer({ min: 1, max: 1_000_000 });
const sizes = fc.tuple(seeds, fc.integer({ min: 1, max: 5 }), fc.integer({ min: 1, max: 3 }));

/** Mean and covariance of the last state given all readings, from the joint normal distribution of everything. */
function batch(model: RandomModel, { u, y }: { u: Float64Array; y: Float64Array }) {
  const [A, B, C, Q, R, P0] = (['A', 'B', 'C', 'Q', 'R', 'P0'] as const).map(
    (name) => new Matrix(model[name]),
  ) as [Matrix, Matrix, Matrix, Matrix, Matrix, Matrix];
  const [n, m, p] = [A.rows, C.rows, B.columns];
  const N = y.length / m;
  const mean: Matrix[] = [Matrix.columnVector(model.x0)];
  for (let k = 1; k < N; k++) {
    mean.push(A.mmul(mean[k - 1]!).add(B.mmul(Matrix.columnVector(u.slice((k - 1) * p, k * p)))));
  }
  const own: Matrix[] = [P0];
  for (let k = 1; k < N; k++)
    own.push(
      A.mmul(own[k - 1]!)
        .mmul(A.transpose())
        .add(Q),
    );
  const power = (k: number) => Array.from({ length: k }).reduce<Matrix>((M) => A.mmul(M), Matrix.eye(n));
  const cross = (k: number, l: number) =>
    k >= l ? power(k - l).mmul(own[l]!) : own[k]!.mmul(power(l - k).transpose());
  const used: { k: number; j: number }[] = [];
  for (let k = 0; k < N; k++)
    for (let j = 0; j < m; j++) if (!Number.isNaN(y[k * m + j]!)) used.push({ k, j });
  const row = (j: number) => C.getRowVector(j);
  const Syy = new Matrix(used.length, used.length);
  const Sxy = new Matrix(n, used.length);
  const residual = new Matrix(used.length, 1);
  used.forEach((a, i) => {
    used.forEach((b, l) => {
      const noise = a.k === b.k ? R.get(a.j, b.j) : 0;
      Syy.set(i, l, row(a.j).mmul(cross(a.k, b.k)).mmul(row(b.j).transpose()).get(0, 0) + noise);
    });
    Sxy.setColumn(i, cross(N - 1, a.k).mmul(row(a.j).transpose()));
    residual.set(i, 0, y[a.k * m + a.j]! - row(a.j).mmul(mean[a.k]!).get(0, 0));
  });
  const gain = solve(Syy, Sxy.transpose()).transpose();
  return {
    x: Matrix.add(mean[N - 1]!, gain.mmul(residual)).to1DArray(),
    P: Matrix.sub(own[N - 1]!, gain.mmul(Sxy.transpose())).to1DArray(),
  };
}

describe('Kalman filter: properties', () => {
  it('equals batch least squares on small problems, gaps and correlated noise included', () => {
    fc.assert(
      fc.property(sizes, ([seed, n, m]) => {
        const model = randomModel(seed, n, m, 1, { correlated: true });
        const series = randomSeries(seed, 6, m, 1, 0.4);
        if (series.y.every(Number.isNaN)) return;
        const { filtered } = answered(kalmanFilter(model, model, model, series)).steps[5]!;
        const all = batch(model, series);
        expect(largestDifference(filtered.x.to1DArray(), all.x)).toBeLessThan(1e-8);
        expect(largestDifference(filtered.P.to1DArray(), all.P)).toBeLessThan(1e-8);
      }),
      { numRuns: 60 },
    );
  });

  it('keeps its covariance symmetric and positive semidefinite', () => {
    fc.assert(
      fc.property(sizes, fc.double({ min: -12, max: 3, noNaN: true }), ([seed, n, m], exponent) => {
        const model = randomModel(seed, n, m, 0);
        const R = model.R.map((row) => row.map((value) => value * 10 ** exponent));
        const { next, sd } = answered(
          filterSeries(model, { ...model, R }, model, randomSeries(seed, 200, m, 0, 0.2)),
        );
        const P = new Matrix(next.P0);
        expect(P.isSymmetric()).toBe(true);
        for (let trial = 0; trial < 5; trial++) {
          const v = Matrix.rand(n, 1, { random: () => Math.sin((seed + trial) * 12.9898) });
          expect(v.transpose().mmul(P).mmul(v).get(0, 0)).toBeGreaterThanOrEqual(-1e-12 * P.trace());
        }
        expect(sd.every((value) => value >= 0)).toBe(true);
      }),
      { numRuns: 60 },
    );
  });

  it('gives the same estimates when the states are permuted', () => {
    fc.assert(
      fc.property(sizes, ([seed, n, m]) => {
        const model = randomModel(seed, n, m, 1);
        const series = randomSeries(seed, 150, m, 1, 0.1);
        const order = Array.from({ length: n }, (_, i) => (i * 3 + seed) % n);
        if (new Set(order).size < n)
          order.reverse().splice(0, n, ...Array.from({ length: n }, (_, i) => n - 1 - i));
        const both = (M: number[][]) => order.map((i) => order.map((j) => M[i]![j]!));
        const columns = (M: number[][]) => M.map((row) => order.map((j) => row[j]!));
        const other = {
          A: both(model.A),
          B: order.map((i) => model.B[i]!),
          C: columns(model.C),
          H: columns(model.H),
          Q: both(model.Q),
          R: model.R,
          x0: order.map((i) => model.x0[i]!),
          P0: both(model.P0),
        };
        const [a, b] = [model, other].map((M) => answered(filterSeries(M, M, M, series)));
        expect(largestDifference(a!.z, b!.z)).toBeLessThan(1e-9);
        expect(largestDifference(a!.sd, b!.sd)).toBeLessThan(1e-9);
      }),
      { numRuns: 40 },
    );
  });

  it('does not mind the units of states and readings', () => {
    fc.assert(
      fc.property(sizes, ([seed, n, m]) => {
        const model = randomModel(seed, n, m, 1);
        const series = randomSeries(seed, 300, m, 1, 0.1);
        const s = Array.from({ length: n }, (_, i) => 10 ** (((seed + 5 * i) % 7) - 3));
        const t = Array.from({ length: m }, (_, j) => 10 ** (((seed + 3 * j) % 5) - 2));
        const scaled = {
          A: model.A.map((row, i) => row.map((a, j) => (s[i]! * a) / s[j]!)),
          B: model.B.map((row, i) => row.map((b) => s[i]! * b)),
          C: model.C.map((row, j) => row.map((c, i) => (t[j]! * c) / s[i]!)),
          H: model.H.map((row) => row.map((h, i) => h / s[i]!)),
          Q: model.Q.map((row, i) => row.map((q, j) => s[i]! * q * s[j]!)),
          R: model.R.map((row, i) => row.map((r, j) => t[i]! * r * t[j]!)),
          x0: model.x0.map((x, i) => s[i]! * x),
          P0: model.P0.map((row, i) => row.map((q, j) => s[i]! * q * s[j]!)),
        };
        const a = answered(filterSeries(model, model, model, series));
        const b = answered(
          filterSeries(scaled, scaled, scaled, { u: series.u, y: series.y.map((v, i) => v * t[i % m]!) }),
        );
        expect(largestDifference(a.z, b.z)).toBeLessThan(1e-8);
        expect(largestDifference(a.nis, b.nis)).toBeLessThan(1e-8);
        expect(b.fixedGainSteps).toBe(a.fixedGainSteps);
      }),
      { numRuns: 40 },
    );
  });

  it('does not mind °C or K, minutes or seconds', () => {
    const network = thermalNetwork({
      unit: '°C',
      nodes: [
        { name: 'hot', heatCapacity: 4e4 },
        { name: 'cold', heatCapacity: 9e4 },
      ],
      boundaries: [{ name: 'gas' }, { name: 'air' }],
      links: [
        { between: ['gas', 'hot'], conductance: 60 },
        { between: ['hot', 'cold'], conductance: 11 },
        { between: ['cold', 'air'], conductance: 8 },
      ],
      heats: [],
      measured: ['cold'],
      estimated: ['hot'],
    });
    const { A, B, C, H } = answered(network).model;
    const perSecond = answered(zeroOrderHold(A, B, 30));
    const scale = (M: number[][]) => M.map((row) => row.map((value) => 60 * value));
    const perMinute = answered(zeroOrderHold(scale(A as number[][]), scale(B as number[][]), 0.5));
    const noise = {
      Q: [
        [0.2, 0],
        [0, 0.1],
      ],
      R: [[0.5]],
    };
    const P0 = [
      [400, 0],
      [0, 100],
    ];
    const y = Float64Array.from({ length: 400 }, (_, k) => 180 + 20 * Math.sin(k / 30));
    const u = Float64Array.from({ length: 800 }, (_, i) => (i % 2 === 0 ? 900 + (i % 50) : 25));
    const run = (held: { A: number[][]; B: number[][] }, offset: number) =>
      answered(
        filterSeries(
          { ...held, C, H },
          noise,
          { x0: [700 + offset, 200 + offset], P0 },
          { u: u.map((v) => v + offset), y: y.map((v) => v + offset) },
        ),
      );
    const celsius = run(perSecond, 0);
    expect(largestDifference(run(perMinute, 0).z, celsius.z)).toBeLessThan(1e-12);
    expect(
      largestDifference(
        run(perSecond, 273.15).z,
        celsius.z.map((v) => v + 273.15),
      ),
    ).toBeLessThan(1e-12);
    expect(largestDifference(run(perSecond, 273.15).nis, celsius.nis)).toBeLessThan(1e-8);
  });

  it('agrees in its square-root form', () => {
    fc.assert(
      fc.property(sizes, ([seed, n, m]) => {
        const model = randomModel(seed, n, m, 2, { correlated: true, feedthrough: true });
        const series = randomSeries(seed, 80, m, 2, 0.2);
        const plain = answered(kalmanFilter(model, model, model, series));
        const root = answered(squareRootFilter(model, model, model, series));
        expect(largestDifference(root.z, plain.z)).toBeLessThan(1e-9);
        expect(largestDifference(root.sd, plain.sd)).toBeLessThan(1e-9);
        expect(Math.abs(root.logLikelihood / plain.logLikelihood - 1)).toBeLessThan(1e-9);
      }),
      { numRuns: 40 },
    );
  });

  it('smoothing ends where the filter ends and never widens the spread', () => {
    fc.assert(
      fc.property(sizes, ([seed, n, m]) => {
        const model = randomModel(seed, n, m, 0);
        const { steps } = answered(kalmanFilter(model, model, model, randomSeries(seed, 30, m, 0, 0.3)));
        const smoothed = answered(smooth(steps)).steps;
        expect(smoothed[29]!.x).toEqual(steps[29]!.filtered.x.to1DArray());
        smoothed.forEach(({ P }, k) => {
          P.forEach((row, i) =>
            expect(row[i]!).toBeLessThanOrEqual(steps[k]!.filtered.P.get(i, i) * (1 + 1e-9)),
          );
        });
      }),
      { numRuns: 30 },
    );
  });
});
