import { describe, expect, it } from 'vitest';
import { exampleHistory } from '../../../shared/contracts/standing-samples.ts';
import {
  sayFlags,
  sayHeld,
  sayResult,
  sayStands,
  sayWhatRests,
} from '../../../shared/rules/laboratory-sentences.ts';
import {
  decimalsFor,
  sayLaboratoryBias,
  sayLimitFound,
  sayOutOfControl,
  sayTooLittle,
  twoDigits,
} from '../../../shared/rules/precision-sentences.ts';

const zone = 'Europe/Copenhagen';
const decision = {
  tagName: 'TY-1402',
  number: 2,
  decision: 'approved' as const,
  decidedAt: '2026-11-30T09:00:00Z',
  samples: 1,
  sampleNumber: 'KX-1',
};
const nothing = { decisions: [], corrected: [], retested: [] };

describe('what rests on the samples of a file', () => {
  it('is nothing where nothing does', () => {
    expect(sayWhatRests(nothing, zone)).toBeNull();
  });

  it('is told by name, with how to go on', () => {
    expect(
      sayWhatRests({ decisions: [decision], corrected: ['KX-2'], retested: ['KX-3', 'KX-4'] }, zone),
    ).toBe(
      'These samples can’t be taken out again: recalibration 2 of TY-1402, approved on 30 Nov 2026, was decided on KX-1; ' +
        'KX-2 has been corrected; a re-test of KX-3 and KX-4 was asked for. Correct or withdraw single samples instead.',
    );
  });

  it('is counted where it is much', () => {
    const many = Array.from({ length: 5 }, (_, i) => ({ ...decision, number: i, samples: 12 }));
    const says = sayWhatRests({ ...nothing, decisions: many, corrected: ['a', 'b', 'c', 'd'] }, zone)!;
    expect(says).toContain('was decided on 12 samples');
    expect(says).toContain('so were 2 more recalibrations');
    expect(says).toContain('a, b, c and 1 more have been corrected');
  });
});

describe('words about a sample', () => {
  it('say what stands now to whom another was quicker', () => {
    const [version] = exampleHistory.versions;
    const corrected = { ...exampleHistory, versions: [{ ...version!, version: 2, value: -3.5 }] };
    expect(sayStands(corrected)).toBe(
      'Tove Halbrook changed this sample on 29 Nov 2026 15:20: version 2 stands, −3.5\u00a0°C. Look at it first; nothing you typed is lost.',
    );
    const withdrawnAt = '2026-11-30T09:00:00Z';
    const withdrawn = {
      ...exampleHistory,
      versions: [{ ...version!, withdrawnAt }],
      deeds: [
        { at: withdrawnAt, by: 'Tove Halbrook', what: 'withdrawn' as const, reason: 'The wrong bottle' },
      ],
    };
    expect(sayStands(withdrawn)).toBe('Tove Halbrook withdrew this sample on 30 Nov 2026 10:00.');
  });

  it('say why it is held, by a rule or by a person', () => {
    expect(sayHeld(['averaged', 'beyond-repeatability'])).toBe('repeats further apart than r');
    expect(sayHeld(['averaged'])).toBe('a re-test was asked for');
    expect(sayFlags(['averaged', 'unheard-of'])).toBe('mean of repeats; unheard-of');
    expect(sayResult({ value: 0.05, qualifier: '<', unit: '%' })).toBe('<\u00a00.05\u00a0%');
  });
});

describe('words about precision', () => {
  const figure = {
    ok: true as const,
    sd: 1.84,
    low: 1.5,
    high: 2.4,
    degreesOfFreedom: 37.6,
    limit: 5.1,
    limitLow: 4.16,
    limitHigh: 6.65,
  };

  it('give a limit with its interval and degrees of freedom, without false digits', () => {
    expect(sayLimitFound(figure, '°C')).toBe('5.1\u00a0°C (95 % interval 4.2 to 6.7), 38 degrees of freedom');
    expect([5.12, 0.0314, 120, 0, -0.5].map(decimalsFor)).toEqual([1, 3, 0, 0, 2]);
    expect([5.123, 0.03149, 1234].map(twoDigits)).toEqual([5.1, 0.031, 1200]);
  });

  it('say what is missing', () => {
    const few = { ok: false as const, got: 1, needed: 6 };
    expect(sayTooLittle({ ...few, reason: 'too-few-repeats' })).toBe(
      'Not known yet: 1 repeat of at least 6.',
    );
    expect(sayTooLittle({ ...few, reason: 'too-few-series', needed: 7 })).toBe(
      'Not known yet: 1 series of at least 7.',
    );
    expect(sayTooLittle({ ...few, reason: 'no-spread' })).toMatch(/^Not known: all repeats are equal/);
  });

  it('say a bias only where its interval leaves zero out', () => {
    const bias = { ok: true as const, mean: 1065, bias: 0.8, low: 0.1, high: 1.5, series: 9 };
    expect(sayLaboratoryBias(bias, 1064.2, '°C')).toBe(
      'Finds 0.80\u00a0°C more than the accepted 1064.2\u00a0°C (95 % interval 0.10 to 1.50, 9 series).',
    );
    expect(sayLaboratoryBias({ ...bias, bias: -0.2, low: -0.9, high: 0.5 }, 1064.2, '°C')).toBe(
      'No bias shown against the accepted 1064.2\u00a0°C: −0.20\u00a0°C (95 % interval −0.90 to 0.50, 9 series).',
    );
  });

  it('say which mean is out of control, and nothing where none is', () => {
    expect(sayOutOfControl({ outOfControl: null }, '°C', zone)).toBe('');
    const outOfControl = { measuredAt: '2026-10-20T08:00:00Z', mean: 12.4, low: 9.47, high: 10.53 };
    expect(sayOutOfControl({ outOfControl }, '', zone)).toBe(
      'The newest mean, 12.40 on 20 Oct 2026 10:00, lies outside the limits of the series before it, 9.47 to 10.53. ' +
        'Look at the method before trusting new results.',
    );
  });
});
