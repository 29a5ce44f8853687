/** Sound arguments for the statistics functions: a series, a second that follows it, designs and limits. */
export const a = [
  1.2, 0.4, -0.3, 2.2, 0.9, 1.7, -1.1, 0.2, 1.4, 0.8, 2.6, -0.7, 1.9, 0.1, 1.1, 0.6, 2.1, -0.2, 1.3, 0.5,
];
export const b = a.map((value, i) => 1.3 * value + Math.sin(i));
export const at = Float64Array.from(a, (_, i) => i * 1000);
export const series = { at, value: Float64Array.from(a), quality: new Uint8Array(a.length) };
export const data = {
  columns: [a, b],
  names: ['a', 'b'],
  y: a.map((value, i) => value - Math.cos(i)),
  intercept: true,
};
export const ewma = { sd: 1, lambda: 0.2, target: 0, width: 3 };
export const cusum = { sd: 1, k: 0.5, h: 4, target: 0 };
export const limits = { residualSd: 1, rmsep: 2 };
export const line = { n: 20, slope: 1, intercept: 0, residualSd: 1, meanX: 0, meanY: 0, sxx: 10 };
export const individuals = {
  centre: 0,
  meanMovingRange: 1,
  sigma: 1,
  lower: -3,
  upper: 3,
  movingRangeUpper: 4,
};
export const current = { slope: 1, offset: 0 };
/** Nine series on one material, of one to three results. */
export const checked = Array.from({ length: 9 }, (_, i) => a.slice(i, i + 1 + (i % 3)));
