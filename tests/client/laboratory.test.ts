import { RouterLinkStub } from '@vue/test-utils';
import { describe, expect, test } from 'vitest';
import { examplePrecision, type MethodPrecision } from '../../shared/contracts/precision.ts';
import { exampleHistory, exampleRetest } from '../../shared/contracts/standing-samples.ts';
import { correctionFieldsOf, readCorrection } from '../../src/components/laboratory/correction-form.ts';
import DecidedOn from '../../src/components/laboratory/DecidedOn.vue';
import { sayAnswer, sayDecision, sayStanding } from '../../src/components/laboratory/laboratory-words.ts';
import {
  offerOf,
  ownR,
  ownSiteR,
  sayMean,
  sayOwn,
  sayOwnInterval,
} from '../../src/components/laboratory/precision-words.ts';
import { blankAnswer, readAnswer } from '../../src/components/laboratory/retest-form.ts';
import SampleVersions from '../../src/components/laboratory/SampleVersions.vue';
import { checkMethod, blankMethod, methodBodyOf } from '../../src/components/samples/method-form.ts';
import { mountPart } from './mount-part.ts';

const zone = 'Europe/Copenhagen';
const sample = exampleHistory.versions[0]!;
const decided = {
  calibrationId: 7,
  number: 2,
  softSensorId: 1,
  tagName: 'TY-1402',
  kind: 'bias',
  decision: 'approved' as const,
  proposedAt: '2026-11-30T08:00:00.000Z',
  decidedAt: '2026-11-30T09:00:00.000Z',
  decidedBy: 'Ines Okafor-Lund',
  sampleVersion: 1,
  reference: 1504,
};

describe('a correction', () => {
  const base = correctionFieldsOf(sample, zone);

  test('starts from what stands, on the site’s clock', () => {
    expect(base).toMatchObject({ value: '1504', takenAt: { text: '2026-11-29T14:00', which: null } });
  });

  test('sends what differs and nothing else', () => {
    const form = { ...base, value: '1502,5', reason: 'Read off wrongly' };
    expect(readCorrection(form, base, zone)).toEqual({ changes: { value: '1502,5' } });
    const moved = { ...form, value: base.value, takenAt: { text: '2026-11-29T13:30', which: null } };
    expect(readCorrection(moved, base, zone)).toEqual({
      changes: { takenAt: '2026-11-29T12:30:00.000Z' },
    });
  });

  test('sends the value with its unit where that is another one', () => {
    const form = { ...base, unit: '°F', reason: 'Reported in °F' };
    expect(readCorrection(form, base, zone)).toEqual({ changes: { value: '1504', unit: '°F' } });
  });

  test('needs a reason and a value that can be read', () => {
    const { errors } = readCorrection({ ...base, value: '1,504', sampleNumber: ' ' }, base, zone);
    expect(Object.keys(errors!).sort()).toEqual(['reason', 'sampleNumber', 'value']);
  });

  test('leaves a date without a time alone until a time is given', () => {
    const dated = correctionFieldsOf({ ...sample, takenAt: null }, zone);
    const form = { ...dated, value: '1', reason: 'x' };
    expect(readCorrection(form, dated, zone)).toEqual({ changes: { value: '1' } });
  });
});

describe('an answer to a re-test', () => {
  test('is asked for, each question under its field', () => {
    expect(readAnswer(blankAnswer()).errors).toEqual({ answer: 'Choose an answer.' });
    expect(readAnswer({ ...blankAnswer(), answer: 'no-bottle' }).errors).toEqual({
      then: 'Choose what becomes of the held result.',
    });
    expect(Object.keys(readAnswer({ ...blankAnswer(), answer: 'result', value: 'x' }).errors!)).toEqual([
      'value',
    ]);
  });

  test('sends what belongs to it', () => {
    const form = { answer: 'no-bottle' as const, value: '5', then: 'hold' as const, note: 'Rinsed' };
    expect(readAnswer(form).body).toEqual({ answer: 'no-bottle', then: 'hold', note: 'Rinsed' });
    expect(readAnswer({ ...form, answer: 'result', value: '5,4' }).body).toEqual({
      answer: 'result',
      value: '5,4',
      note: 'Rinsed',
    });
  });

  test('is said with who and when', () => {
    expect(sayAnswer(exampleRetest, zone)).toBe('Not answered yet.');
    const answered = {
      ...exampleRetest,
      answer: 'result' as const,
      answeredBy: 'Tove Halbrook',
      answeredAt: '2026-11-29T17:00:00.000Z',
      resultValue: 1501,
      note: 'Second cell',
    };
    expect(sayAnswer(answered, zone)).toBe(
      'Tove Halbrook answered on 29 Nov 2026 18:00: a second result, 1501\u00a0°C: “Second cell”',
    );
  });
});

describe('how a sample stands', () => {
  const at = '2026-11-30T09:00:00.000Z';

  test('is one sentence', () => {
    expect(sayStanding(exampleHistory)).toBe('It stands as it was entered.');
    const held = { ...exampleHistory, versions: [{ ...sample, heldSince: at, flags: ['far-from-last'] }] };
    expect(sayStanding(held)).toBe(
      'Held since 30 Nov 2026 10:00: far from the last results. It does not count.',
    );
    const withdrawn = {
      ...exampleHistory,
      versions: [{ ...sample, withdrawnAt: at }],
      deeds: [{ at, by: 'Tove Halbrook', what: 'withdrawn' as const, reason: 'The wrong bottle' }],
    };
    expect(sayStanding(withdrawn)).toBe(
      'Withdrawn by Tove Halbrook on 30 Nov 2026 10:00: “The wrong bottle”',
    );
  });

  test('shows every version with its reason, and what was decided on which', () => {
    const newer = {
      ...sample,
      id: 919,
      version: 2,
      value: 1502,
      asWritten: '1502',
      changeReason: 'Read off wrongly',
    };
    const history = {
      ...exampleHistory,
      versions: [newer, { ...sample, supersededAt: at }],
      decisions: [decided],
    };
    const versions = mountPart(SampleVersions, { props: { history } });
    expect(versions.text()).toContain('Read off wrongly');
    expect(versions.text()).toContain('superseded 30 Nov 2026 10:00');
    const decisions = mountPart(DecidedOn, { props: { history }, stubs: { RouterLink: RouterLinkStub } });
    expect(decisions.text()).toContain('1, no longer stands');
    expect(decisions.text()).toContain('Approved by Ines Okafor-Lund on 30 Nov 2026');
    expect(sayDecision({ ...decided, decision: null, decidedAt: null }, zone)).toBe('Waits for a decision');
  });

  test('says so where nothing was decided', () => {
    const part = mountPart(DecidedOn, {
      props: { history: exampleHistory },
      stubs: { RouterLink: RouterLinkStub },
    });
    expect(part.text()).toContain('No recalibration was judged on this sample.');
  });
});

describe('precision beside the method’s', () => {
  const figure = (limit: number, degreesOfFreedom: number) => ({
    ok: true as const,
    sd: limit / 2.77,
    low: 1,
    high: 2,
    degreesOfFreedom,
    limit,
    limitLow: limit * 0.8,
    limitHigh: limit * 1.3,
  });
  const found: MethodPrecision = {
    ...examplePrecision,
    replicates: { samples: 12, figure: figure(5.1, 12) },
    standards: [
      { ...examplePrecision.standards[0]!, repeatability: figure(4.8, 30), sitePrecision: figure(7.9, 14.2) },
    ],
    offers: { r: 4.8, R: 7.9 },
  };

  test('is that which rests on most degrees of freedom', () => {
    expect(ownR(found)!.limit).toBe(4.8);
    expect(sayOwn(ownR(found), '°C')).toBe('4.8\u00a0°C');
    expect(sayOwnInterval(ownSiteR(found))).toBe('6.3 to 10.3, 14 degrees of freedom');
    expect(sayOwn(ownR(examplePrecision), '°C')).toBe('not known');
  });

  test('is offered where it differs from the method’s and r stays at or below R', () => {
    expect(offerOf(found, 'r')).toEqual({ value: 4.8, says: 'Use 4.8 as r' });
    expect(offerOf({ ...found, repeatability: 4.8 }, 'r')).toBeNull();
    expect(offerOf({ ...found, reproducibility: 4 }, 'r')).toBeNull();
    expect(offerOf(examplePrecision, 'r')).toBeNull();
    expect(offerOf(found, 'R')).toEqual({ value: 7.9, says: 'Use 7.9 as R' });
    expect(offerOf({ ...found, offers: { r: 6, R: null } }, 'r')!.says).toBe('Use 6.0 as r');
  });

  test('shows the mean of a series to one digit more than its results', () => {
    expect(sayMean([5.4, 5.5])).toBe('5.45');
    expect(sayMean([1482.5])).toBe('1,482.5');
  });
});

describe('r and R of a method', () => {
  test('are typed with a decimal comma or point', () => {
    const form = { ...blankMethod, name: 'M', repeatability: '5,1', reproducibility: '9.0' };
    expect(checkMethod(form)).toEqual({});
    expect(methodBodyOf(form)).toMatchObject({ repeatability: 5.1, reproducibility: 9 });
  });

  test('can’t cross', () => {
    const form = { ...blankMethod, repeatability: '5,1', reproducibility: '4' };
    expect(checkMethod(form).reproducibility).toMatch(/^R \(4\) can’t be below r \(5\.1\)/);
  });
});
