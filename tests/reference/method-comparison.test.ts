import { describe, expect, it } from 'vitest';
import {
  fitCalibrationLine,
  inverseIntervalAt,
  lineIntervalsAt,
} from '../../shared/numerics/calibration-line.ts';
import { demingRegression } from '../../shared/numerics/deming.ts';
import { passingBablok } from '../../shared/numerics/passing-bablok.ts';
import { answered, expectAllRelative, expectRelative } from './expectations.ts';
import deming from './values/deming-ncss1.json';
import passing from './values/passing-bablok.json';
import prediction from './values/prediction-inverse.json';

/**
 * Source: NCSS documentation ch. 303, example 1. Data and printed line read in published copies, recomputed in closed
 * form. Error variance of x is 4 times that of y; the ratio taken the wrong way round gives 0.8906.
 */
describe('Deming regression', () => {
  const { x, y, var_x, var_y } = deming.inputs;
  const rel = deming.tolerance.rel;
  it('line and jackknife standard errors', () => {
    const line = answered(demingRegression(x, y, { varianceRatio: var_x / var_y }));
    expectAllRelative([line.slope, line.intercept], [deming.expected.slope, deming.expected.intercept], rel);
    expectRelative(line.slope, deming.expected.published.slope, 1e-12);
    expectAllRelative(
      [line.slopeStandardError, line.interceptStandardError],
      deming.expected.jackknife_se,
      rel,
    );
  });
  it('orthogonal regression', () => {
    const { slope, intercept } = answered(demingRegression(x, y, { varianceRatio: 1 }));
    const { orthogonal_ratio1 } = deming.expected;
    expectAllRelative([slope, intercept], [orthogonal_ratio1.slope, orthogonal_ratio1.intercept], rel);
  });
  it('exchanging x and y inverts the line', () => {
    const forth = answered(demingRegression(x, y, { varianceRatio: 4 }));
    const back = answered(demingRegression(y, x, { varianceRatio: 1 / 4 }));
    expectRelative(back.slope, 1 / forth.slope, 1e-12);
  });
});

/**
 * Source: Passing & Bablok (1983); NCSS documentation ch. 313, data read in published copies; R MethComp and deming
 * give 1.00 and −0.15; limits computed with exact rationals.
 */
describe('Passing-Bablok regression', () => {
  it.each([
    ['30 pairs', passing.inputs.x, passing.inputs.y, passing.expected.first],
    ['10 pairs', passing.inputs.second.x, passing.inputs.second.y, passing.expected.second],
  ])('%s', (_name, x, y, expected) => {
    const line = answered(passingBablok(x, y));
    expect([line.slopes, line.offset]).toEqual([expected.N_slopes, expected.K_offset]);
    expectAllRelative(
      [line.slope, line.slopeLow, line.slopeHigh, line.intercept, line.interceptLow, line.interceptHigh],
      [
        expected.slope,
        expected.slope_lo,
        expected.slope_hi,
        expected.intercept,
        expected.intercept_lo,
        expected.intercept_hi,
      ],
      1e-12,
    );
  });
  it('exchanging x and y inverts the slope', () => {
    const { x, y } = passing.inputs.second;
    expectRelative(answered(passingBablok(x, y)).slope * answered(passingBablok(y, x)).slope, 1, 1e-12);
  });
});

// Source: R datasets::cars with R 4.2.2 predict.lm; arsenic data of Graybill & Iyer (1994), limits in closed form.
describe('straight line with its intervals', () => {
  const rel = prediction.tolerance.rel;
  it.each(prediction.expected.cars.intervals)('stopping distance at speed $x', ({ x, fit, conf, pred }) => {
    const line = answered(fitCalibrationLine(prediction.inputs.cars.speed, prediction.inputs.cars.dist));
    const at = answered(lineIntervalsAt(line, x));
    expectAllRelative([at.fit, at.meanLow, at.meanHigh, at.newLow, at.newHigh], [fit, ...conf, ...pred], rel);
  });
  it.each([
    ['cars', prediction.inputs.cars.speed, prediction.inputs.cars.dist, prediction.expected.cars.inverse_y50],
    [
      'arsenic',
      prediction.inputs.arsenic.x_actual,
      prediction.inputs.arsenic.y_measured,
      prediction.expected.arsenic.inverse_y3,
    ],
  ] as const)('reads x back from a measured y (%s)', (_name, x, y, expected) => {
    const line = answered(fitCalibrationLine(x, y));
    const inverse = answered(inverseIntervalAt(line, expected.y0));
    expectAllRelative(
      [inverse.x, inverse.low, inverse.high, inverse.g, inverse.standardError],
      [expected.x0, expected.lo, expected.hi, expected.g, expected.wald_se],
      rel,
    );
  });
  it('refuses to read x back along a slope that may be zero', () => {
    const line = answered(fitCalibrationLine([1, 2, 3, 4, 5], [2, -1, 1, -2, 1]));
    expect(inverseIntervalAt(line, 1)).toMatchObject({ ok: false, reason: 'cannot-tell', field: 'slope' });
  });
});
