import { describe, expect, it } from 'vitest';
import { randomFrom } from '../../../seeds/random.ts';
import { compositeOver } from '../../../shared/numerics/composite.ts';

const hour = 3_600_000;

function series(rows: [atHours: number, value: number, sd?: number, quality?: number][]) {
  return {
    at: Float64Array.from(rows, ([at]) => at * hour),
    value: Float64Array.from(rows, ([, value]) => value),
    sd: Float64Array.from(rows, ([, , sd]) => sd ?? 1),
    quality: Uint8Array.from(rows, ([, , , quality]) => quality ?? 0),
  };
}

const over = (rows: Parameters<typeof series>[0], from: number, to: number, hold = 1) =>
  compositeOver(series(rows), from * hour, to * hour, hold * hour);

describe('the time average over a composite', () => {
  it('weighs each instant the same, not each reading', () => {
    // By hand: 1 h rising from 10 to 20 (mean 15), 2 h at 20: (1 · 15 + 2 · 20)/3 = 18.333…
    const found = over(
      [
        [0, 10],
        [0.25, 12.5],
        [0.5, 15],
        [1, 20],
        [3, 20],
      ],
      0,
      3,
      2,
    );
    expect(found).toMatchObject({ ok: true, coverage: 1 });
    if (found.ok) expect(found.estimate).toBeCloseTo(55 / 3, 12);
  });

  it('cuts the readings at the ends of the span where they lie between', () => {
    // From 0.5 (value 5) to 1.5 (value 15) on the straight line through 0, 10, 20: mean 10.
    const found = over(
      [
        [0, 0],
        [1, 10],
        [2, 20],
      ],
      0.5,
      1.5,
    );
    if (!found.ok) throw new Error(found.reason);
    expect(found.estimate).toBeCloseTo(10, 12);
    // A ramp of width 10 has the SD 10/√12.
    expect(found.spread).toBeCloseTo(10 / Math.sqrt(12), 12);
  });

  it('averages the SDs and does not divide them by √n', () => {
    const rows = Array.from({ length: 25 }, (_, i): [number, number, number] => [i, 50, i < 12 ? 2 : 4]);
    const found = over(rows, 0, 24);
    if (!found.ok) throw new Error(found.reason);
    // By hand: 11 h at 2, 1 h rising from 2 to 4 (mean 3), 12 h at 4: (22 + 3 + 48)/24.
    expect(found.sd).toBeCloseTo(73 / 24, 12);
  });

  it('equals a constant estimate, whatever the times of its readings', () => {
    const random = randomFrom(3);
    for (let run = 0; run < 50; run++) {
      let at = -1;
      const rows: [number, number][] = [];
      while (at < 26) rows.push([(at += 0.05 + 0.9 * random.uniform()), 42.5]);
      const found = over(rows, 0, 24);
      if (!found.ok) throw new Error(found.reason);
      expect(found.estimate).toBeCloseTo(42.5, 10);
      expect(found.spread).toBeLessThan(1e-6);
    }
  });

  it('is the midpoint of a straight ramp, whatever the times of its readings', () => {
    const random = randomFrom(4);
    for (let run = 0; run < 50; run++) {
      let at = -1;
      const rows: [number, number][] = [];
      while (at < 26) rows.push([(at += 0.05 + 0.9 * random.uniform()), 3 + 2 * at]);
      const [from, to] = [10 * random.uniform(), 12 + 10 * random.uniform()];
      const found = over(rows, from, to);
      if (!found.ok) throw new Error(found.reason);
      expect(found.estimate).toBeCloseTo(3 + from + to, 9);
    }
  });

  it('needs estimates for nine tenths of the span, and bridges no gap longer than the hold limit', () => {
    const rows = (missing: number): [number, number][] =>
      Array.from({ length: 101 }, (_, i): [number, number] => [i, 7]).filter(
        ([at]) => at <= 40 || at >= 40 + missing,
      );
    expect(over(rows(10), 0, 100)).toMatchObject({ ok: true, coverage: 0.9 });
    expect(over(rows(11), 0, 100)).toMatchObject({
      ok: false,
      reason: 'no-estimate',
      field: 'coverage',
      figure: 0.89,
      needed: 0.9,
    });
    expect(over(rows(11), 0, 100, 11)).toMatchObject({ ok: true, coverage: 1 });
  });

  it('passes over Bad readings', () => {
    const found = over(
      [
        [0, 5],
        [1, 900, 1, 2],
        [2, 5],
      ],
      0,
      2,
      2,
    );
    if (!found.ok) throw new Error(found.reason);
    expect(found.estimate).toBe(5);
  });

  it('refuses an empty span and unsound input', () => {
    const rows: [number, number][] = [
      [0, 1],
      [1, 1],
    ];
    expect(over(rows, 1, 1)).toMatchObject({ ok: false, reason: 'out-of-range', field: 'span' });
    expect(over(rows, NaN, 1)).toMatchObject({ ok: false, reason: 'non-finite-input' });
    expect(over([], 0, 1)).toMatchObject({ ok: false, reason: 'no-estimate', figure: 0 });
  });
});
