import { describe, expect, it } from 'vitest';
import { randomFrom } from '../../../seeds/random.ts';
import { type PairingRule, pairSample } from '../../../shared/rules/pair-sample.ts';

const minute = 60_000;
const rule: PairingRule = {
  transportDelayMs: 0,
  pairingWindowMs: 0,
  holdLimitMs: 5 * minute,
  steadyStateGate: false,
};
const sample = { takenMs: 60 * minute, value: 100, censored: false, held: false };

function series(value: (i: number) => number, n = 120) {
  const indices = Array.from({ length: n }, (_, i) => i);
  return {
    at: Float64Array.from(indices, (i) => i * minute),
    value: Float64Array.from(indices, value),
    quality: new Uint8Array(n),
  };
}

describe('pairing a sample', () => {
  const flat = series((i) => 100 + i / 10);

  it('takes the estimate at the time taken minus the transport delay', () => {
    expect(pairSample(flat, sample, rule)).toMatchObject({ estimate: 106, error: 6, notCounted: null });
    expect(pairSample(flat, sample, { ...rule, transportDelayMs: 10 * minute }).estimate).toBe(105);
  });

  it('says why a sample does not count', () => {
    const why = (own: object) => pairSample(flat, { ...sample, ...own }, rule).notCounted;
    expect(why({ takenMs: null })).toBe('date-without-time');
    expect(why({ takenMs: 500 * minute })).toBe('no-estimate');
    expect(why({ censored: true })).toBe('censored');
    expect(why({ held: true })).toBe('held');
  });

  it('leaves out a sample taken while the process moved, only where the gate is on', () => {
    const random = randomFrom(5);
    const moving = series((i) => 100 + (i > 40 ? (i - 40) * 2 : 0) + 0.3 * random.normal());
    const resting = series(() => 100 + 0.3 * random.normal());
    const gated = { ...rule, steadyStateGate: true };
    expect(pairSample(moving, sample, gated).notCounted).toBe('unsteady');
    expect(pairSample(moving, sample, rule).notCounted).toBeNull();
    expect(pairSample(resting, sample, gated).notCounted).toBeNull();
  });
});

describe('pairing a composite', () => {
  const ramp = series((i) => 100 + i);
  const composite = { ...sample, takenMs: 100 * minute, compositeMs: 60 * minute };

  it('takes the average of the estimate over its time, ending where a single sample would stand', () => {
    expect(pairSample(ramp, composite, rule)).toEqual({
      estimate: expect.closeTo(170, 9),
      error: expect.closeTo(70, 9),
      spread: expect.closeTo(60 / Math.sqrt(12), 9),
      sd: null,
      notCounted: null,
    });
    expect(pairSample(ramp, composite, { ...rule, transportDelayMs: 10 * minute }).estimate).toBeCloseTo(
      160,
      9,
    );
  });

  it('counts though the process moved, but not while it is held or beyond the method’s range', () => {
    const gated = { ...rule, steadyStateGate: true };
    expect(pairSample(ramp, sample, gated).notCounted).toBe('unsteady');
    expect(pairSample(ramp, composite, gated).notCounted).toBeNull();
    expect(pairSample(ramp, { ...composite, held: true }, rule).notCounted).toBe('held');
    expect(pairSample(ramp, { ...composite, censored: true }, rule).notCounted).toBe('censored');
  });

  it('does not count where estimates are missing for more than a tenth of its time', () => {
    const some = pairSample(ramp, { ...composite, takenMs: 130 * minute }, rule);
    expect(some).toMatchObject({ estimate: null, error: null, notCounted: 'composite-gaps' });
    expect(pairSample(ramp, { ...composite, takenMs: 500 * minute }, rule).notCounted).toBe('no-estimate');
    expect(pairSample(ramp, { ...composite, takenMs: null }, rule).notCounted).toBe('date-without-time');
  });
});
