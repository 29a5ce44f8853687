import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { driftHistory, driftStart, driftStep } from '../../../shared/numerics/drift.ts';
import { answered, expectRelative } from '../../reference/expectations.ts';

const design = { sd: 1, k: 0.5, h: 4 };
const statuses = (errors: number[], restarts: number[] = []) =>
  answered(driftHistory(errors, design, restarts)).points.map(({ status }) => status);

describe('the bias CUSUM of one soft sensor', () => {
  it('signals, is confirmed two counted samples later, and says since when and how much', () => {
    const { points } = answered(driftHistory([0, 0, 2, 2, 2, 2, 2, 2], design));
    expect(points.map(({ status }) => status)).toEqual([
      'in-control',
      'in-control',
      'in-control',
      'in-control',
      'signal',
      'signal',
      'confirmed',
      'confirmed',
    ]);
    expect(points[4]).toMatchObject({
      signalled: true,
      side: 'high',
      onset: 2,
      meanSinceOnset: 2,
      countSinceOnset: 3,
    });
    expect(points[6]).toMatchObject({ confirmed: true, signalled: false, countSinceOnset: 5 });
    expect(points[7]).toMatchObject({ confirmed: false });
  });

  it('an excursion that is back below h two samples later is not confirmed, and not yet cleared', () => {
    // Sums 1.5, 3, 4.5, 3, 2.5, then below h/2.
    const { points } = answered(driftHistory([2, 2, 2, -1, 0, -0.5], design));
    expect(points.map(({ status }) => status)).toEqual([
      'in-control',
      'in-control',
      'signal',
      'signal',
      'signal',
      'in-control',
    ]);
    expect(points.some(({ confirmed }) => confirmed)).toBe(false);
    expect(points[5]).toMatchObject({ cleared: true, side: null, onset: null });
  });

  it('a sum that dips below h for one sample only is confirmed all the same', () => {
    // Sums 1.5, 3, 4.5, 3.9, 5.4: beyond h at the crossing and two samples later.
    expect(statuses([2, 2, 2, -0.1, 2])).toEqual([
      'in-control',
      'in-control',
      'signal',
      'signal',
      'confirmed',
    ]);
  });

  it('a crossing that lapsed has to be made anew', () => {
    // Sums 1.5, 3, 4.5, 3, 2.5, 4.5, 4.4, 4.3.
    expect(statuses([2, 2, 2, -1, 0, 2.5, 0.4, 0.4]).slice(4)).toEqual([
      'signal',
      'signal',
      'signal',
      'confirmed',
    ]);
  });

  it('a confirmed signal stands until both sums are below h/2', () => {
    const errors = [2, 2, 2, 2, 2, 2, ...new Array<number>(15).fill(0)];
    const { points } = answered(driftHistory(errors, design));
    const cleared = points.findIndex((point) => point.cleared);
    expect(points[cleared]!.high).toBeLessThan(2);
    expect(points[cleared - 1]!.high).toBeGreaterThanOrEqual(2);
    expect(points[cleared - 1]!.status).toBe('confirmed');
  });

  it('an event restarts the sums', () => {
    const errors = [2, 2, 2, 2, 2, 2, 2, 2];
    expect(statuses(errors, [3])[3]).toBe('in-control');
    expect(statuses(errors, [3]).slice(3)).toEqual(statuses(errors.slice(3)));
  });

  it('low readings are the mirror image of high ones', () => {
    fc.assert(
      fc.property(
        fc.array(fc.double({ min: -3, max: 3, noNaN: true }), { minLength: 1, maxLength: 60 }),
        (errors) => {
          const up = answered(driftHistory(errors, design)).points;
          const down = answered(
            driftHistory(
              errors.map((error) => -error),
              design,
            ),
          ).points;
          expect(down.map(({ status }) => status)).toEqual(up.map(({ status }) => status));
        },
      ),
    );
  });

  it('one sample at a time from a stored state agrees with the whole history, means since onset included', () => {
    fc.assert(
      fc.property(
        fc.array(fc.double({ min: -2, max: 4, noNaN: true }), { minLength: 1, maxLength: 60 }),
        (errors) => {
          const { points } = answered(driftHistory(errors, design));
          let state = driftStart();
          for (const [i, error] of errors.entries()) {
            const step = driftStep(JSON.parse(JSON.stringify(state)), error, design);
            state = step.state;
            expect(step.point).toEqual(points[i]);
            if (step.point.meanSinceOnset === null) continue;
            const since = errors.slice(i + 1 - step.point.countSinceOnset, i + 1);
            expectRelative(
              step.point.meanSinceOnset,
              since.reduce((a, b) => a + b, 0) / since.length,
              1e-9,
              1e-9,
            );
          }
        },
      ),
    );
  });
});
