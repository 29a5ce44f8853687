import { describe, expect, it } from 'vitest';
import {
  applyCorrection,
  fitCandidate,
  noCorrection,
} from '../../../shared/numerics/recalibration-candidates.ts';
import { judgeRecalibration, laterPerformance } from '../../../shared/numerics/recalibration.ts';
import { seededRandom } from '../../trials/seeded-random.ts';
import { answered, expectRelative } from '../../reference/expectations.ts';

/** References of SD 5 about 50, raw estimates with the given slope, offset and unit noise. */
function samplesOf(seed: number, n: number, raw: (reference: number) => number, noise = 1) {
  const random = seededRandom(seed);
  const reference = Float64Array.from({ length: n }, () => 50 + 5 * random.normal());
  return { reference, raw: reference.map((value) => raw(value) + noise * random.normal()) };
}
const options = { current: noCorrection, labSd: 0.5, closedLoop: false };
const verdicts = (candidates: { kind: string; verdict: string }[]) =>
  Object.fromEntries(candidates.map(({ kind, verdict }) => [kind, verdict]));

describe('choosing a recalibration', () => {
  it('a steady offset is answered by a bias correction of the other sign', () => {
    const judged = answered(
      judgeRecalibration(
        samplesOf(1, 40, (x) => x + 4),
        options,
      ),
    );
    expect(judged.chosen).toBe('bias');
    expect(judged.correction!.slope).toBe(1);
    expectRelative(judged.correction!.offset, -4, 0.15);
    expect(verdicts(judged.candidates)).toMatchObject({ 'as-found': 'improved-on', bias: 'chosen' });
  });

  it('a wrong slope is answered by slope and intercept', () => {
    const judged = answered(
      judgeRecalibration(
        samplesOf(2, 60, (x) => 0.6 * x + 5, 0.3),
        options,
      ),
    );
    expect(['linear', 'deming']).toContain(judged.chosen);
    const { slope, offset } = judged.correction!;
    expectRelative(offset + slope * (0.6 * 50 + 5), 50, 0.02);
    expect(slope).toBeGreaterThan(1.2);
  });

  it('noise alone leaves the estimate as found', () => {
    const judged = answered(
      judgeRecalibration(
        samplesOf(3, 60, (x) => x),
        options,
      ),
    );
    expect(judged.chosen).toBe('as-found');
    expect(judged.correction).toEqual(noCorrection);
    expect(verdicts(judged.candidates).bias).toBe('gain-too-small');
  });

  it('a closed loop, a narrow reference and a slope that may be 1 bar the slopes and say so', () => {
    const wrongSlope = samplesOf(2, 60, (x) => 0.6 * x + 5);
    const barred = (samples: typeof wrongSlope, extra: object) =>
      verdicts(answered(judgeRecalibration(samples, { ...options, ...extra })).candidates).linear;
    expect(barred(wrongSlope, { closedLoop: true })).toBe('closed-loop');
    expect(barred(wrongSlope, { labSd: 3 })).toBe('reference-spread-too-small');
    expect(
      barred(
        samplesOf(4, 60, (x) => x, 0.2),
        {},
      ),
    ).toBe('slope-interval-includes-1');
  });

  it('a correction in force is carried into the new one', () => {
    const current = { slope: 2, offset: -3 };
    const samples = samplesOf(5, 40, (x) => (x + 3) / 2 + 1, 0.1);
    const judged = answered(judgeRecalibration(samples, { ...options, current }));
    expect(judged.correction!.slope).toBe(2);
    expectRelative(judged.correction!.offset, -5, 0.02);
    const mended = samples.raw.map(
      (raw, i) => applyCorrection(judged.correction!, raw) - samples.reference[i]!,
    );
    expect(Math.abs(answered(laterPerformance(mended)).bias)).toBeLessThan(0.01);
  });

  it('a slope is put on top of the slope in force', () => {
    const current = { slope: 2, offset: -3 };
    const samples = samplesOf(9, 60, (x) => (0.6 * x + 5 + 3) / 2, 0.1);
    const { correction, slope } = answered(fitCandidate('linear', samples, current, 1));
    expectRelative(correction.slope, 2 * slope!, 1e-12);
    const mended = samples.raw.map((raw, i) => applyCorrection(correction, raw) - samples.reference[i]!);
    expect(Math.abs(mended.reduce((a, b) => a + b, 0))).toBeLessThan(1e-8);
  });

  it('a refit is taken only when it gains enough over the best simple candidate', () => {
    const samples = samplesOf(6, 50, (x) => x + 4);
    const perfect = samples.reference.map((value, i) => value + (i % 2 ? 0.1 : -0.1));
    const judged = answered(
      judgeRecalibration(samples, { ...options, procedures: [{ kind: 'refit', predictions: perfect }] }),
    );
    expect(judged).toMatchObject({ chosen: 'refit', correction: null });
    expect(judged.candidates.at(-1)).toMatchObject({ over: 'bias', verdict: 'chosen' });
    const useless = { kind: 'refit' as const, predictions: samples.raw };
    expect(answered(judgeRecalibration(samples, { ...options, procedures: [useless] })).chosen).toBe('bias');
  });

  it('rolling origin never looks ahead: changing a later sample leaves the earlier errors alone', () => {
    const samples = samplesOf(7, 30, (x) => x + 4);
    const before = answered(
      fitCandidate(
        'bias',
        { raw: samples.raw.subarray(0, 20), reference: samples.reference.subarray(0, 20) },
        noCorrection,
        1,
      ),
    );
    const bias =
      samples.raw.subarray(0, 20).reduce((sum, raw, i) => sum + raw - samples.reference[i]!, 0) / 20;
    expectRelative(before.correction.offset, -bias, 1e-10);
    const jump = { raw: samples.raw.with(29, 1e4), reference: samples.reference };
    const judged = answered(judgeRecalibration(jump, options));
    const expected = 1e4 - samples.reference[29]!;
    const asFound = judged.candidates[0]!;
    expect(asFound.rmse!).toBeGreaterThan(expected / Math.sqrt(22) - 10);
  });

  it('says how many samples are missing', () => {
    expect(
      judgeRecalibration(
        samplesOf(8, 12, (x) => x),
        options,
      ),
    ).toEqual({
      ok: false,
      reason: 'not-enough-data',
      field: 'raw',
      needed: 18,
      got: 12,
    });
  });

  it('performance is unproven below ten later samples', () => {
    expect(answered(laterPerformance([1, 2, 3, 1, 2, 3, 1, 2, 3])).proven).toBe(false);
    expect(answered(laterPerformance([1, 2, 3, 1, 2, 3, 1, 2, 3, 1])).proven).toBe(true);
  });
});
