import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { pairAt } from '../../../shared/numerics/pairing.ts';
import { answered, expectRelative } from '../../reference/expectations.ts';

const minute = 60_000;
const series = (values: number[], quality?: number[], at?: number[], sd?: number[]) => ({
  at: Float64Array.from(at ?? values.map((_, i) => i * minute)),
  value: Float64Array.from(values),
  quality: Uint8Array.from(quality ?? values.map(() => 0)),
  ...(sd ? { sd: Float64Array.from(sd) } : {}),
});
const point = { holdLimitMs: 5 * minute, windowMs: 0 };

describe('the estimate at the instant of a sample', () => {
  it('a Good reading exactly there is used as is', () => {
    const paired = answered(pairAt(series([10, 20, 30], undefined, undefined, [1, 2, 3]), minute, point));
    expect(paired).toEqual({ ok: true, estimate: 20, sd: 2, spread: 0, readings: 1 });
  });

  it('between two Good readings it is interpolated, with its SD', () => {
    const paired = answered(pairAt(series([10, 20], undefined, undefined, [1, 2]), minute / 4, point));
    expect(paired).toEqual({ ok: true, estimate: 12.5, sd: 1.25, spread: 0, readings: 2 });
  });

  it('a Bad or Uncertain reading is bridged as long as its Good neighbours are closer than the hold limit', () => {
    expect(answered(pairAt(series([10, 99, 30], [0, 2, 0]), minute, point)).estimate).toBe(20);
    expect(answered(pairAt(series([10, 99, 30], [0, 1, 0]), minute, point)).estimate).toBe(20);
    expect(pairAt(series([10, 99, 30], [0, 2, 0]), minute, { holdLimitMs: minute, windowMs: 0 })).toEqual({
      ok: false,
      reason: 'no-estimate',
      field: 'gap',
      figure: 2 * minute,
      needed: minute,
    });
  });

  it('outside the readings there is no estimate, however long the window', () => {
    const wide = { holdLimitMs: 60 * minute, windowMs: 60 * minute };
    expect(pairAt(series([10, 20]), -1, wide)).toMatchObject({ reason: 'no-estimate', field: 'before' });
    expect(pairAt(series([10, 20]), 2 * minute, wide)).toMatchObject({
      reason: 'no-estimate',
      field: 'after',
    });
    expect(pairAt(series([]), 0, wide)).toMatchObject({ reason: 'no-estimate' });
    expect(pairAt(series([1, 2], [2, 2]), 0, wide)).toMatchObject({ reason: 'no-estimate' });
  });

  it('over a window of a regular grid it is the plain mean with the SD of the readings', () => {
    const paired = answered(
      pairAt(series([1, 2, 9, 4, 5]), 2 * minute, { holdLimitMs: 5 * minute, windowMs: 4 * minute }),
    );
    expectRelative(paired.estimate, 21 / 5, 1e-12);
    expectRelative(
      paired.spread,
      Math.sqrt((3.2 ** 2 + 2.2 ** 2 + 4.8 ** 2 + 0.2 ** 2 + 0.8 ** 2) / 4),
      1e-12,
    );
    expect(paired.readings).toBe(5);
  });

  it('over irregular readings each counts with the time it stands for', () => {
    // A ramp through the origin, read densely on one side only: the plain mean of the readings would be 2.75.
    const ramp = [-8, -6, -4, -2, 0, 1, 2, 3, 4, 5, 6, 7, 8, 9, 10];
    const paired = answered(
      pairAt(
        series(
          ramp,
          undefined,
          ramp.map((x) => x * minute),
        ),
        0,
        { holdLimitMs: 5 * minute, windowMs: 16 * minute },
      ),
    );
    expect(Math.abs(paired.estimate)).toBeLessThan(0.3);
  });

  it('an estimate within the hold limit lies between its neighbours whatever the readings', () => {
    const reading = fc.tuple(
      fc.integer({ min: 1, max: 4 }),
      fc.double({ min: -100, max: 100, noNaN: true }),
      fc.integer({ min: 0, max: 2 }),
    );
    fc.assert(
      fc.property(
        fc.array(reading, { minLength: 1, maxLength: 30 }),
        fc.integer({ min: 0, max: 120 }),
        fc.integer({ min: 0, max: 9 }),
        (readings, at, window) => {
          let clock = 0;
          const times = readings.map(([gap]) => (clock += gap) * minute);
          const values = readings.map(([, value]) => value);
          const own = series(
            values,
            readings.map(([, , quality]) => quality),
            times,
          );
          const paired = pairAt(own, at * minute, { holdLimitMs: 6 * minute, windowMs: window * minute });
          if (!paired.ok) {
            expect(paired.reason).toBe('no-estimate');
            return;
          }
          const good = values.filter((_, i) => own.quality[i] === 0);
          expect(paired.estimate).toBeGreaterThanOrEqual(Math.min(...good) - 1e-9);
          expect(paired.estimate).toBeLessThanOrEqual(Math.max(...good) + 1e-9);
          expect(paired.spread).toBeGreaterThanOrEqual(0);
        },
      ),
    );
  });

  it('no SD is claimed unless every reading used carries one', () => {
    expect(
      answered(pairAt(series([10, 20], undefined, undefined, [1, NaN]), minute / 2, point)).sd,
    ).toBeNull();
    expect(answered(pairAt(series([10, 20]), minute / 2, point)).sd).toBeNull();
  });
});
