import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import {
  cusumChart,
  cusumStart,
  cusumStep,
  ewmaChart,
  ewmaStart,
  ewmaStep,
  individualsChart,
  individualsLimits,
  individualsStep,
} from '../../../shared/numerics/control-charts.ts';
import {
  keepRecent,
  nelsonRules,
  rulesSignalled,
  runRules,
  westernElectricRules,
} from '../../../shared/numerics/run-rules.ts';
import { answered, expectRelative } from '../../reference/expectations.ts';

const errors = fc.array(fc.double({ min: -6, max: 6, noNaN: true }), { minLength: 2, maxLength: 80 });
const design = { sd: 1.3, k: 0.5, h: 4 };
const ewma = { sd: 1.3, lambda: 0.2, target: 0.1, width: 2.7 };

describe('charts: one sample at a time agrees with the whole series', () => {
  it('EWMA', () => {
    fc.assert(
      fc.property(errors, (values) => {
        let state = ewmaStart(ewma);
        const points = values.map((value) => {
          const step = ewmaStep(state, value, ewma);
          state = step.state;
          return step.point;
        });
        expect(points).toEqual(answered(ewmaChart(values, ewma)).points);
      }),
    );
  });

  it('CUSUM, continued from a state saved half way', () => {
    fc.assert(
      fc.property(errors, (values) => {
        const whole = answered(cusumChart(values, design)).points;
        let state = cusumStart();
        for (const [i, value] of values.entries()) {
          const step = cusumStep(JSON.parse(JSON.stringify(state)), value, design);
          state = step.state;
          expect(step.point).toEqual(whole[i]);
        }
      }),
    );
  });

  it('individuals and moving range', () => {
    fc.assert(
      fc.property(errors, (values) => {
        const limits = individualsLimits(values);
        if (!limits.ok) {
          expect(limits.reason).toBe('no-spread');
          return;
        }
        const { points } = answered(individualsChart(values, limits));
        expect(points).toEqual(
          values.map((value, i) => individualsStep(value, i > 0 ? values[i - 1]! : null, limits)),
        );
      }),
    );
  });

  it.each([
    ['Western Electric', westernElectricRules],
    ['Nelson', nelsonRules],
  ])('%s rules', (_name, rules) => {
    fc.assert(
      fc.property(errors, (values) => {
        const { signals } = answered(runRules(values, rules));
        let recent: number[] = [];
        for (const [i, value] of values.entries()) {
          recent = keepRecent(recent, value, rules);
          expect(rulesSignalled(recent, rules)).toEqual(
            rules.map(({ code }) => code).filter((code) => signals[code]!.includes(i)),
          );
        }
      }),
    );
  });
});

describe('charts keep what they must', () => {
  it('errors with the other sign give the other side', () => {
    fc.assert(
      fc.property(errors, (values) => {
        const up = answered(cusumChart(values, design)).points;
        const down = answered(
          cusumChart(
            values.map((value) => -value),
            design,
          ),
        ).points;
        for (const [i, point] of up.entries()) {
          expectRelative(point.high, down[i]!.low, 1e-12);
          expectRelative(point.low, down[i]!.high, 1e-12);
        }
      }),
    );
  });

  it('a change of unit changes neither sums nor signals', () => {
    fc.assert(
      fc.property(errors, fc.constantFrom(0.5, 2, 1024), (values, unit) => {
        const converted = { ...design, sd: design.sd * unit };
        const scaled = values.map((value) => value * unit);
        expect(answered(cusumChart(scaled, converted)).points).toEqual(
          answered(cusumChart(values, design)).points,
        );
      }),
    );
  });

  it('the onset is the first sample of the excursion that signals', () => {
    const values = [0, 0, 0, 2, 2, 2, 2, 2];
    const { points, firstSignal } = answered(cusumChart(values, { sd: 1, k: 0.5, h: 4 }));
    expect(firstSignal).toBe(5);
    expect(points[5]).toMatchObject({ signal: 'high', onset: 3, high: 4.5 });
  });

  it('refuses a design that makes no sense, naming the field', () => {
    expect(ewmaChart([1], { ...ewma, lambda: 1.5 })).toEqual({
      ok: false,
      reason: 'out-of-range',
      field: 'lambda',
      figure: 1.5,
    });
    expect(cusumChart([1], { ...design, sd: 0 })).toMatchObject({ reason: 'out-of-range', field: 'sd' });
    expect(cusumChart([], design)).toMatchObject({ reason: 'not-enough-data', needed: 1, got: 0 });
  });
});
