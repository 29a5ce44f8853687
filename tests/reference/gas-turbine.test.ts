import { existsSync, readFileSync } from 'node:fs';
import { fileURLToPath } from 'node:url';
import { describe, expect, it } from 'vitest';
import { biasWithInterval } from '../../shared/numerics/bias.ts';
import { crossValidatePls } from '../../shared/numerics/cross-validation.ts';
import { exponentialUpdate } from '../../shared/numerics/exponential-update.ts';
import { holdLast } from '../../shared/numerics/hold-last.ts';
import { fitPls, plsPredictions } from '../../shared/numerics/pls.ts';
import { fitLeastSquares, predictAt } from '../../shared/numerics/regression.ts';
import { answered } from './expectations.ts';

/**
 * Source: Kaya, Tüfekci & Uzun, Turk. J. Elec. Eng. & Comp. Sci. 27 (2019), gas turbine NOx (UCI 551, CC BY 4.0), one
 * reference sample a day. Expected figures computed with numpy on the same split (trained before 2014).
 */
const folder = fileURLToPath(new URL('../../../shared/data/gas_turbine_nox/', import.meta.url));
const split = Date.parse('2014-01-01T00:00:00Z');

function readRows(name: string): string[][] {
  const [, ...lines] = readFileSync(folder + name, 'utf8')
    .trim()
    .split('\n');
  return lines.map((line) => line.split(','));
}

function loadSamples() {
  const inputsAt = new Map(readRows('history.csv').map(([at, ...inputs]) => [at, inputs.map(Number)]));
  return readRows('lab.csv').map(([at, value]) => ({
    at: Date.parse(at!),
    value: Number(value),
    inputs: inputsAt.get(at!)!,
  }));
}

describe.skipIf(!existsSync(folder))(
  'gas turbine NOx (skipped where the public data set is not beside the project)',
  () => {
    const samples = existsSync(folder) ? loadSamples() : [];
    const training = samples.filter(({ at }) => at < split);
    const tested = samples.filter(({ at }) => at >= split);
    const names = ['AT', 'AP', 'AH', 'AFDP', 'GTEP', 'TIT', 'TAT', 'TEY', 'CDP'];
    const data = {
      columns: names.map((_, j) => Float64Array.from(training, ({ inputs }) => inputs[j]!)),
      names,
      y: Float64Array.from(training, ({ value }) => value),
    };
    const rawErrors = () => {
      const fit = answered(fitLeastSquares({ ...data, intercept: true }));
      return { fit, errors: tested.map(({ inputs, value }) => predictAt(fit, inputs) - value) };
    };

    it('a regression on 925 samples has RMSE 8.467399 and bias +0.940108 on the 606 later ones', () => {
      const { fit, errors } = rawErrors();
      const judged = answered(biasWithInterval(errors));
      expect(fit.n).toBe(925);
      expect(fit.intercept).toBeCloseTo(-118.92525136908411, 6);
      expect(fit.residualSd).toBeCloseTo(8.355674312479703, 9);
      expect(judged.n).toBe(606);
      expect(judged.rmse).toBeCloseTo(8.467399053472025, 9);
      expect(judged.bias).toBeCloseTo(0.9401079586917322, 9);
      expect(judged.sd).toBeCloseTo(8.422000362744017, 9);
    });

    it.each([
      [0.1, 7.205251682157316, 0.1287807368484728],
      [0.3, 6.971563096268232, 0.002960412868328109],
      [1, 8.213106032357206, -0.05581450238634654],
    ])('an exponential update with factor %s has RMSE %s and bias %s', (lambda, rmse, bias) => {
      const updated = answered(exponentialUpdate(rawErrors().errors, lambda));
      expect(updated.rmse).toBeCloseTo(rmse, 9);
      expect(updated.bias).toBeCloseTo(bias, 9);
    });

    it('ten contiguous folds choose five PLS components, RMSEP 12.193593 on the later samples', () => {
      const options = { most: 9, scale: true, folds: 10, scheme: 'contiguous' as const };
      const validated = answered(crossValidatePls(data, options));
      // Computed with numpy 2.4.6 on the same folds.
      const expected = [
        10.66026325971196, 9.260574560592222, 9.224332578281992, 9.096396027848472, 9.06689722036658,
        9.071192705170631, 9.291794643027341, 9.281455290838556, 9.296503158005292,
      ];
      for (const [k, rmsecv] of expected.entries()) expect(validated.rmsecv[k + 1]).toBeCloseTo(rmsecv, 8);
      expect(validated.best).toBe(5);
      const model = answered(fitPls(data, { components: 5, scale: true }));
      const errors = tested.map(({ inputs, value }) => plsPredictions(model, inputs)[5]! - value);
      const judged = answered(biasWithInterval(errors));
      expect(judged.rmse).toBeCloseTo(12.193592998047464, 8);
      expect(judged.bias).toBeCloseTo(9.098804329106045, 8);
    });

    it('holding the last result has RMSE 9.091786 and bias −0.052757', () => {
      const last = training.at(-1)!;
      const run = [last, ...tested];
      const at = run.map((sample) => sample.at);
      const held = answered(holdLast({ takenAt: at, reportedAt: at, value: run.map(({ value }) => value) }));
      expect(held.n).toBe(606);
      expect(held.rmse).toBeCloseTo(9.091785767053324, 9);
      expect(held.bias).toBeCloseTo(-0.05275742574257419, 9);
    });
  },
);
