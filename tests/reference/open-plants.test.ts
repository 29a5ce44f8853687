import { existsSync, readFileSync } from 'node:fs';
import { fileURLToPath } from 'node:url';
import { describe, expect, it } from 'vitest';
import { lag1Autocorrelation, shrunkAutocorrelation } from '../../shared/numerics/bias.ts';
import { chronologicalFolds } from '../../shared/numerics/cross-validation.ts';
import { designCusum } from '../../shared/numerics/cusum-design.ts';
import { driftHistory } from '../../shared/numerics/drift.ts';
import { holdLast } from '../../shared/numerics/hold-last.ts';
import { fitLeastSquares, predictAt } from '../../shared/numerics/regression.ts';
import { answered } from './expectations.ts';

const minute = 60_000;
const folderOf = (name: string) => fileURLToPath(new URL(`../../../shared/data/${name}/`, import.meta.url));
const missing = (name: string) => !existsSync(folderOf(name));

interface Sample {
  at: number;
  value: number;
  x: number[];
}

/** Reference samples beside the inputs of their row; `lagMs` before the stated time. */
function load(name: string, lagMs: number) {
  const read = (file: string) =>
    readFileSync(folderOf(name) + file, 'utf8')
      .trim()
      .split('\n')
      .map((line) => line.split(','));
  const baseline = JSON.parse(readFileSync(`${folderOf(name)}baseline.json`, 'utf8'));
  const [header, ...rows] = read('history.csv');
  const places = (baseline.inputs as string[]).map((input) => header!.indexOf(input));
  const inputsAt = new Map(
    rows.map((row) => [Date.parse(row[0]!), places.map((place) => Number(row[place]))]),
  );
  const samples = read('lab.csv')
    .slice(1)
    .flatMap(([time, value]): Sample[] => {
      const at = Date.parse(time!);
      const x = inputsAt.get(at - lagMs);
      return x ? [{ at, value: Number(value), x }] : [];
    });
  const split = Date.parse(baseline.split.time);
  const names = baseline.inputs as string[];
  return {
    baseline,
    names,
    training: samples.filter(({ at }) => at < split),
    later: samples.filter(({ at }) => at >= split),
  };
}

function fitOn(samples: readonly Sample[], names: string[]) {
  const columns = names.map((_, j) => Float64Array.from(samples, ({ x }) => x[j]!));
  return answered(fitLeastSquares({ columns, names, y: samples.map(({ value }) => value), intercept: true }));
}

const errorsOf = (fit: Parameters<typeof predictAt>[0], samples: readonly Sample[]) =>
  samples.map(({ x, value }) => predictAt(fit, x) - value);
const rmse = (errors: readonly number[]) =>
  Math.sqrt(errors.reduce((sum, error) => sum + error * error, 0) / errors.length);

// Source: iron-ore flotation, hourly (E. Magalhães Oliveira, 2017, CC0); figures of its baseline.json were computed
// independently with numpy.
describe.skipIf(missing('flotation'))(
  'flotation (skipped where the public data set is not beside the project)',
  () => {
    it('ends in the verdict that the model is no better than holding the last result', () => {
      const { baseline, names, training, later } = load('flotation', 0);
      const errors = errorsOf(fitOn(training, names), later);
      expect(rmse(errors)).toBeCloseTo(baseline.recipes.ols.at_lab_test.rmse, 6);
      const all = [training.at(-1)!, ...later];
      const times = all.map(({ at }) => at);
      const held = answered(
        holdLast({ takenAt: times, reportedAt: times, value: all.map(({ value }) => value) }),
      );
      expect(held.rmse).toBeCloseTo(baseline.recipes.persistence.at_lab_test.rmse, 6);
      expect(rmse(errors)).toBeGreaterThan(held.rmse);
    });
  },
);

// Source: Tennessee Eastman process, Russell, Chiang & Braatz 2000, runs 0 and 13: normal, then a slow drift of the
// kinetics from 8 h on. The time of a result is 24 min after the product it tells of.
describe.skipIf(missing('tep_d13'))(
  'Tennessee Eastman (skipped where the public data set is not beside the project)',
  () => {
    it('gives at most one signal of the bias CUSUM on the normal run, and one after the drift begins', () => {
      const { names, training, later } = load('tep_d13', 24 * minute);
      const { folds } = answered(chronologicalFolds(training.length, 10, 'contiguous'));
      const held = folds.flatMap(({ from, to, training: rows }) =>
        errorsOf(
          fitOn(
            rows.map((row) => training[row]!),
            names,
          ),
          training.slice(from, to),
        ),
      );
      const sd = Math.sqrt(held.reduce((sum, error) => sum + error * error, 0) / held.length);
      const phi = shrunkAutocorrelation(held.length, answered(lag1Autocorrelation(held)).r1);
      const { k, h } = answered(designCusum({ falseSignalsPerYear: 0.1, samplesPerYear: 365 * 96, phi }));
      const design = { sd, k, h, target: 0 };
      const signals = (errors: readonly number[]) =>
        answered(driftHistory(errors, design)).points.flatMap(({ signalled }, i) => (signalled ? [i] : []));
      expect(signals(held).length).toBeLessThanOrEqual(1);
      const drift = later[0]!.at + 8 * 60 * minute;
      const found = signals(errorsOf(fitOn(training, names), later)).map((i) => later[i]!.at - drift);
      const first = found.find((delay) => delay >= 0);
      process.stdout.write(
        `Tennessee Eastman, run 2: first signal ${first === undefined ? 'never' : `${Math.round(first / minute)} min`} after the drift begins, ${found.filter((delay) => delay < 0).length} before\n`,
      );
      expect(first).toBeDefined();
    });
  },
);
