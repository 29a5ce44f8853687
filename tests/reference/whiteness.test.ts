import { describe, it } from 'vitest';
import { durbinWatson, durbinWatsonBounds, durbinWatsonP } from '../../shared/numerics/durbin-watson.ts';
import { fitLeastSquares } from '../../shared/numerics/regression.ts';
import { autocorrelations, boxPierce, ljungBox } from '../../shared/numerics/whiteness.ts';
import { answered, expectAllRelative, expectRelative } from './expectations.ts';
import auto from './values/autocorrelation.json';
import collinearity from './values/collinearity-longley.json';
import trend from './values/mann-kendall-sen.json';
import prediction from './values/prediction-inverse.json';

const rel = auto.tolerance.rel;

// Source: Ljung & Box, Biometrika 65 (1978); lh series of R datasets. Computed with R 4.2.2 Box.test and statsmodels 0.13.5.
describe('portmanteau tests of the lh series', () => {
  const { lh } = auto.inputs;
  it('autocorrelations', () => {
    expectAllRelative(answered(autocorrelations(lh, 10)).r, auto.expected.acf.slice(1), rel);
  });
  it.each(Object.entries(auto.expected.ljung_box))('Ljung-Box, %s lags', (lags, [q, p]) => {
    const test = answered(ljungBox(lh, Number(lags)));
    expectRelative(test.statistic, q!, rel);
    expectRelative(test.p, p!, rel);
  });
  it.each(Object.entries(auto.expected.box_pierce))('Box-Pierce, %s lags', (lags, [q, p]) => {
    const test = answered(boxPierce(lh, Number(lags)));
    expectRelative(test.statistic, q!, rel);
    expectRelative(test.p, p!, rel);
  });
});

// Source: Durbin & Watson (1951), Savin & White (1977). Computed with lmtest 0.9-40 and by Imhof integration.
describe('Durbin-Watson', () => {
  const { rows, header, order } = collinearity.inputs;
  const nile = trend.expected.cases.find(({ name }) => name.startsWith('Nile'))!;
  const sets = {
    longley: {
      columns: order.map((name) => rows.map((row) => row[header.indexOf(name)]!)),
      y: rows.map((row) => row[header.indexOf('Employed')]!),
    },
    nile: { columns: [nile.t], y: nile.y },
    cars: { columns: [prediction.inputs.cars.speed], y: prediction.inputs.cars.dist },
  };
  const { durbin_watson, dw_pvalues_R } = auto.expected;
  it.each([
    ['longley', durbin_watson.longley, dw_pvalues_R.longley_greater],
    ['nile', durbin_watson.nile_on_year, dw_pvalues_R.nile_greater],
    ['cars', durbin_watson.cars_dist_on_speed, dw_pvalues_R.cars_greater],
  ] as const)('statistic and exact p of the %s regression', (name, d, p) => {
    const { columns, y } = sets[name];
    const fit = answered(
      fitLeastSquares({ columns, names: columns.map((_, j) => `x${j}`), y, intercept: true }),
    );
    expectRelative(answered(durbinWatson(fit.residuals)).d, d, 1e-9);
    expectRelative(answered(durbinWatsonP(d, columns)).p, p, 1e-8);
  });
  it.each(auto.expected.bounds)(
    '5 % bounds, n = $n, $regressors regressors',
    ({ n, regressors, dL, dU, published }) => {
      const { lower, upper } = answered(durbinWatsonBounds(n, regressors));
      expectRelative(lower, dL, 1e-8);
      expectRelative(upper, dU, 1e-8);
      expectAllRelative([lower, upper], published, 0, 0.0055);
    },
  );
});
