import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { forecastCrossing } from '../../../shared/numerics/forecast.ts';
import { holdLast } from '../../../shared/numerics/hold-last.ts';
import { autoregression, seededRandom } from '../../trials/seeded-random.ts';
import { answered, expectAllRelative, expectRelative } from '../../reference/expectations.ts';

const day = 86_400_000;
const start = Date.UTC(2026, 0, 1);
const daily = (n: number) => Float64Array.from({ length: n }, (_, i) => start + i * day);
const drifting = (n: number, perDay: number, noise: number, from = 0) => {
  const random = seededRandom(5);
  return Float64Array.from({ length: n }, (_, i) => from + perDay * i + noise * random.normal());
};

describe('forecast of the day on which the allowed error is reached', () => {
  it('a clean drift of 0.1 a day reaches 5 on day 50', () => {
    const now = start + 19 * day;
    const forecast = answered(
      forecastCrossing(daily(20), drifting(20, 0.1, 0.01), { allowed: 5, nowMs: now }),
    );
    expectRelative((forecast.crossesAt! - start) / day, 50, 0.02);
    expect(forecast.notBefore!).toBeLessThan(forecast.crossesAt!);
    expect(forecast.notAfter!).toBeGreaterThan(forecast.crossesAt!);
    expect(forecast.notBefore!).toBeGreaterThan(now);
  });

  it('at the ends of the interval the edges of the band are on the allowed error', () => {
    const at = daily(15);
    const errors = drifting(15, 0.2, 0.4);
    const nowMs = start + 14 * day;
    const forecast = answered(forecastCrossing(at, errors, { allowed: 6, nowMs }));
    // The same band found by stepping: the interval for the day of crossing is where the line ± half width meets 6.
    const atEdge = answered(
      forecastCrossing(at, errors, { allowed: 6, nowMs: forecast.notBefore! + 60_000 }),
    );
    expectRelative(atEdge.notBefore!, forecast.notBefore! + 60_000, 0, 1);
    const justBefore = answered(
      forecastCrossing(at, errors, { allowed: 6, nowMs: forecast.notBefore! - day / 2 }),
    );
    expectRelative(justBefore.notBefore!, forecast.notBefore!, 0, 1);
  });

  it('a drift downwards is the mirror image', () => {
    const options = { allowed: 6, nowMs: start + 14 * day };
    const up = answered(forecastCrossing(daily(15), drifting(15, 0.2, 0.4), options));
    const down = answered(
      forecastCrossing(
        daily(15),
        drifting(15, 0.2, 0.4).map((error) => -error),
        options,
      ),
    );
    expect(down).toMatchObject({
      level: -6,
      crossesAt: up.crossesAt,
      notBefore: up.notBefore,
      notAfter: up.notAfter,
    });
  });

  it('a slope that may be zero leaves the far end open', () => {
    const forecast = answered(
      forecastCrossing(daily(10), drifting(10, 0.02, 1, 2), { allowed: 8, nowMs: start + 9 * day }),
    );
    expect(forecast.slopeLow).toBeLessThan(0);
    expect(forecast.notAfter).toBeNull();
    expect(forecast.notBefore).not.toBeNull();
  });

  it('a line already beyond is said to be', () => {
    const forecast = answered(
      forecastCrossing(daily(10), drifting(10, 0.1, 0.1, 7), { allowed: 5, nowMs: start + 9 * day }),
    );
    expect(forecast).toMatchObject({ beyond: true, crossesAt: null, notBefore: null, notAfter: null });
  });

  it('errors that hang together about the line leave less certainty than independent ones', () => {
    const at = daily(40);
    const wave = Array.from({ length: 40 }, (_, i) => 0.1 * i + Math.sin(i / 3));
    const mixed = wave.map((_, i) => 0.1 * i + Math.sin(((i * 17) % 40) / 3));
    const width = (errors: number[]) => {
      const { slopeLow, slopeHigh } = answered(forecastCrossing(at, errors, { allowed: 9, nowMs: at[39]! }));
      return slopeHigh - slopeLow;
    };
    expect(width(wave)).toBeGreaterThan(1.3 * width(mixed));
  });

  it('the interval of the slope covers the truth in about 95 % of drifts with autocorrelated errors', () => {
    const random = seededRandom(12);
    let covered = 0;
    for (let run = 0; run < 1000; run++) {
      const errors = autoregression(random, 30, 0.3).map((value, i) => value + 0.1 * i);
      const { slopeLow, slopeHigh } = answered(
        forecastCrossing(daily(30), errors, { allowed: 9, nowMs: start }),
      );
      if (slopeLow <= 0.1 && slopeHigh >= 0.1) covered++;
    }
    expect(covered).toBeGreaterThan(910);
    expect(covered).toBeLessThan(985);
  });

  it('does not depend on the unit of the errors', () => {
    fc.assert(
      fc.property(fc.constantFrom(0.001, 7, 1e4), (unit) => {
        const errors = drifting(12, 0.2, 0.3);
        const one = answered(forecastCrossing(daily(12), errors, { allowed: 6, nowMs: start + 11 * day }));
        const other = answered(
          forecastCrossing(
            daily(12),
            errors.map((error) => unit * error),
            { allowed: 6 * unit, nowMs: start + 11 * day },
          ),
        );
        expectAllRelative(
          [other.crossesAt!, other.notBefore!, other.notAfter!],
          [one.crossesAt!, one.notBefore!, one.notAfter!],
          0,
          1000,
        );
      }),
    );
  });
});

describe('holding the last reported result', () => {
  it('uses what had been reported when the sample was taken, not what had been taken', () => {
    const held = answered(
      holdLast({ takenAt: [0, 10, 20, 30], reportedAt: [5, 25, 28, 35], value: [1, 2, 4, 8] }),
    );
    // At 10 and 20 only the first result is known, at 30 the third.
    expect(held.scored).toEqual([1, 2, 3]);
    expect([...held.errors]).toEqual([-1, -3, -4]);
    expectRelative(held.bias, -8 / 3, 1e-12);
  });

  it('last means last reported, also when it was taken earlier', () => {
    const held = answered(holdLast({ takenAt: [0, 10, 100], reportedAt: [50, 20, 101], value: [1, 2, 5] }));
    expect([...held.errors]).toEqual([-4]);
  });

  it('does not depend on the order of the rows', () => {
    const rows = { takenAt: [0, 10, 20, 30], reportedAt: [5, 25, 28, 35], value: [1, 2, 4, 8] };
    const turned = holdLast({
      takenAt: rows.takenAt.toReversed(),
      reportedAt: rows.reportedAt.toReversed(),
      value: rows.value.toReversed(),
    });
    expect(answered(turned).rmse).toBe(answered(holdLast(rows)).rmse);
  });

  it('says when no sample had a result before it, and refuses a report before the sample', () => {
    expect(holdLast({ takenAt: [0, 1], reportedAt: [5, 6], value: [1, 2] })).toMatchObject({
      reason: 'not-enough-data',
      got: 0,
    });
    expect(holdLast({ takenAt: [0, 10], reportedAt: [1, 9], value: [1, 2] })).toMatchObject({
      reason: 'out-of-range',
      field: 'reportedAt',
    });
  });
});
