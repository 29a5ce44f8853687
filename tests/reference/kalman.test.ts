import { describe, expect, it } from 'vitest';
import { filterSeries } from '../../shared/numerics/filter-run.ts';
import { kalmanFilter } from '../../shared/numerics/kalman.ts';
import { filterRecords } from '../../shared/numerics/kalman-records.ts';
import { steadyFilter } from '../../shared/numerics/riccati.ts';
import { smooth } from '../../shared/numerics/smoother.ts';
import { squareRootFilter } from '../../shared/numerics/square-root-filter.ts';
import { answered, expectAllRelative, expectRelative } from './expectations.ts';
import irregular from './values/irregular-missing.json';
import correlated from './values/kalman-correlated.json';
import nile from './values/nile-local-level.json';
import welch from './values/welch-bishop.json';

const local = { A: [[1]], C: [[1]] };
const noInputs = new Float64Array(0);

// Source: Welch & Bishop, UNC TR 95-041 (parameters read in stored copies, recursion computed with numpy). The paper's
// prose is remembered as P → 0.0002, which is what Q = 0 gives; the recursion is what counts.
describe('random constant of Welch & Bishop', () => {
  const { Q, R, P0, x0, truth, steps, fixed_series: fixed } = welch.inputs;

  it('covariance and gain do not depend on the data', () => {
    const y = new Float64Array(steps).fill(truth);
    const run = answered(
      kalmanFilter(local, { Q: [[Q]], R: [[R]] }, { x0: [x0], P0: [[P0 - 0]] }, { u: noInputs, y }),
    );
    // The recursion adds Q before the first update too.
    const first = answered(
      kalmanFilter(local, { Q: [[Q]], R: [[R]] }, { x0: [x0], P0: [[P0 + Q]] }, { u: noInputs, y }),
    );
    expect(run.steps).toHaveLength(steps);
    for (const [k, P] of Object.entries(welch.expected.P_posterior)) {
      expectRelative(first.steps[Number(k) - 1]!.filtered.P.get(0, 0), P, welch.tolerance.rel);
    }
    for (const [k, K] of Object.entries(welch.expected.K)) {
      expectRelative(first.steps[Number(k) - 1]!.update!.gain.get(0, 0), K, welch.tolerance.rel);
    }
  });

  it('steady state in closed form', () => {
    const steady = answered(steadyFilter({ ...local, Q: [[Q]], R: [[R]] }));
    expectRelative(steady.predictedCovariance[0]![0]!, welch.expected.steady_prior, 1e-12);
    expectRelative(steady.filteredCovariance[0]![0]!, welch.expected.steady_posterior, 1e-12);
  });

  it('ten readings, Q = 0', () => {
    const y = Float64Array.from(fixed.z);
    const run = answered(
      kalmanFilter(
        local,
        { Q: [[fixed.Q]], R: [[fixed.R]] },
        { x0: [fixed.x0], P0: [[fixed.P0]] },
        { u: noInputs, y },
      ),
    );
    welch.expected.fixed_series.forEach(({ x, P, K }, k) => {
      const { filtered, update } = run.steps[k]!;
      expectAllRelative(
        [filtered.x.get(0, 0), filtered.P.get(0, 0), update!.gain.get(0, 0)],
        [x, P, K],
        welch.tolerance.rel,
      );
    });
  });
});

// Source: Durbin & Koopman, 2nd ed. 2012, ch. 2 (p. 37 variances read in statsmodels' tests); values computed with numpy,
// statsmodels 0.13.5 and a dense GLS smoother. Log-likelihood −632.5456 leaves the first, diffuse observation out.
describe('Nile flow, local level model', () => {
  const y = Float64Array.from(nile.inputs.volume);
  const noise = { Q: [[nile.inputs.Q_level_var]], R: [[nile.inputs.H_obs_var]] };
  const years = nile.inputs.years;
  const { rel_fixed_parameters: rel, loglik_abs } = nile.tolerance;
  const at = (values: Record<string, number>, read: (k: number) => number) => {
    for (const [year, value] of Object.entries(values)) {
      const k = years.indexOf(Number(year));
      if (k >= 1) expectRelative(read(k - 1), value, rel);
    }
  };

  // After a diffuse start the first observation leaves x = y₁, P = R; the filter proper begins with the second.
  const diffuse = { x0: [y[0]!], P0: [[nile.inputs.H_obs_var + nile.inputs.Q_level_var]] };
  const series = { u: noInputs, y: y.slice(1) };
  const run = answered(kalmanFilter(local, noise, diffuse, series));

  it('filtered and predicted level with an exact diffuse start', () => {
    const { filtered_level, filtered_var, predicted_level, predicted_var } = nile.expected.exact_diffuse;
    at(filtered_level, (k) => run.z[k]!);
    at(filtered_var, (k) => run.sd[k]! ** 2);
    at(predicted_level, (k) => run.steps[k]!.predicted.x.get(0, 0));
    at(predicted_var, (k) => run.steps[k]!.predicted.P.get(0, 0));
  });

  it('log-likelihood without the diffuse observation', () => {
    const expected = nile.expected.exact_diffuse.loglik_KFAS_convention;
    expect(Math.abs(run.logLikelihood - expected)).toBeLessThan(loglik_abs);
    expect(
      Math.abs(answered(filterSeries(local, noise, diffuse, series)).logLikelihood - expected),
    ).toBeLessThan(loglik_abs);
  });

  it('smoothed level', () => {
    const { steps } = answered(smooth(run.steps));
    at(nile.expected.exact_diffuse.smoothed_level, (k) => steps[k]!.x[0]!);
    at(nile.expected.exact_diffuse.smoothed_var, (k) => steps[k]!.P[0]![0]!);
  });

  it('approximate start P = 1e7: every observation counts', () => {
    const { loglik, filtered_level, filtered_var } = nile.expected.approximate_P1_1e7;
    const all = answered(filterSeries(local, noise, { x0: [0], P0: [[1e7]] }, { u: noInputs, y }));
    expect(Math.abs(all.logLikelihood - loglik)).toBeLessThan(loglik_abs);
    for (const [year, value] of Object.entries(filtered_level))
      expectRelative(all.z[years.indexOf(Number(year))]!, value, rel);
    for (const [year, value] of Object.entries(filtered_var)) {
      expectRelative(all.sd[years.indexOf(Number(year))]! ** 2, value, rel);
    }
  });

  it('steady state and forecasts', () => {
    const steady = answered(steadyFilter({ ...local, ...noise }));
    expectRelative(steady.predictedCovariance[0]![0]!, nile.expected.steady_state.P_prior, rel);
    expectRelative(steady.filterGain[0]![0]!, nile.expected.steady_state.K, rel);
    const gap = new Float64Array(30).fill(NaN);
    const on = answered(
      filterSeries(local, noise, { x0: [0], P0: [[1e7]] }, { u: noInputs, y: Float64Array.of(...y, ...gap) }),
    );
    for (const { h, mean, var_level } of nile.expected.forecasts_from_1970) {
      expectRelative(on.z[99 + h]!, mean, rel);
      expectRelative(on.sd[99 + h]! ** 2, var_level, rel);
    }
  });
});

// Source: own data. Computed with numpy, statsmodels 0.13.5 (time-varying matrices) and batch Gaussian conditioning.
describe('irregular times, two sensors, a missing reading, two readings at one instant', () => {
  const { qc, R_by_sensor, prior_mean_at_t0, prior_cov_at_t0, records } = irregular.inputs;
  const model = {
    A: [
      [0, 1],
      [0, 0],
    ],
    density: [
      [0, 0],
      [0, qc],
    ],
    sensors: {
      A: { row: [1, 0], variance: R_by_sensor.A },
      B: { row: [1, 0], variance: R_by_sensor.B },
    },
  };
  const readings = records.map(({ t, y, sensor }) => ({ at: t, sensor, value: y }));
  const start = { x0: prior_mean_at_t0, P0: prior_cov_at_t0 };
  const run = answered(filterRecords(model, start, readings));
  const { rel, abs } = irregular.tolerance;

  it('each record before and after its update', () => {
    irregular.expected.filter.forEach((expected, i) => {
      const { predicted, filtered, update } = run.steps[i]!;
      expectAllRelative(predicted.x.to1DArray(), expected.prior_mean, rel, abs);
      expectAllRelative(predicted.P.to1DArray(), expected.prior_cov.flat(), rel, abs);
      expectAllRelative(filtered.x.to1DArray(), expected.post_mean, rel, abs);
      expectAllRelative(filtered.P.to1DArray(), expected.post_cov.flat(), rel, abs);
      if (expected.innovation === undefined) expect(update).toBeNull();
      else {
        const figures = [
          update!.innovation.get(0, 0),
          update!.S.get(0, 0),
          update!.nis,
          ...update!.gain.to1DArray(),
        ];
        expectAllRelative(figures, [expected.innovation, expected.S, expected.NIS, ...expected.K], rel, abs);
      }
    });
  });

  it('log-likelihood, whatever the order of the two readings at one instant', () => {
    expectRelative(run.logLikelihood, irregular.expected.loglik, rel);
    const swapped = [...readings];
    [swapped[5], swapped[6]] = [swapped[6]!, swapped[5]!];
    const other = answered(filterRecords(model, start, swapped));
    expectRelative(other.logLikelihood, irregular.expected.loglik, rel);
    expectAllRelative(other.steps[6]!.filtered.x.to1DArray(), run.steps[6]!.filtered.x.to1DArray(), rel, abs);
  });

  it('smoothed path', () => {
    const { steps } = answered(smooth(run.steps));
    for (const { t, mean, cov } of irregular.expected.smoothed) {
      const last = records.findLastIndex((record) => record.t === t);
      expectAllRelative(steps[last]!.x, mean, rel, 1e-9);
      expectAllRelative(steps[last]!.P.flat(), cov.flat(), rel, 1e-9);
    }
  });
});

// Computed with statsmodels 0.13.5 KalmanSmoother (tolerance 0): correlated R, D and F not zero, readings missing one at a
// time and together.
describe('correlated measurement noise and missing readings', () => {
  const { inputs, expected, tolerance } = correlated;
  const series = {
    u: Float64Array.from(inputs.u.flat()),
    y: Float64Array.from(inputs.y.flat().map((value) => value ?? NaN)),
  };

  for (const [name, filter] of Object.entries({ kalmanFilter, filterSeries, squareRootFilter })) {
    it(name, () => {
      const run = answered(filter(inputs, inputs, inputs, series));
      expectAllRelative(run.z, expected.z, tolerance.rel, 1e-9);
      expectAllRelative(run.sd, expected.sd, tolerance.rel);
      expectRelative(run.logLikelihood, expected.logLikelihood, tolerance.rel);
    });
  }

  it('state for the step after the last', () => {
    const { next } = answered(filterSeries(inputs, inputs, inputs, series));
    expectAllRelative(next.x0, expected.nextState, tolerance.rel, 1e-9);
  });

  it('smoother', () => {
    const { steps } = answered(smooth(answered(kalmanFilter(inputs, inputs, inputs, series)).steps));
    steps.forEach(({ x, P }, k) => {
      expectAllRelative(x, expected.smoothed[k]!, 1e-8, 1e-9);
      expectAllRelative(
        P.map((row, i) => row[i]!),
        expected.smoothedVariance[k]!,
        1e-8,
      );
    });
  });
});
