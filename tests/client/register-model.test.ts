import { describe, expect, test } from 'vitest';
import type { FitSummary, RegressionModel } from '../../shared/contracts/models.ts';
import { coefficientWords, modelWords } from '../../src/components/register/coefficient.ts';
import { modelDifference } from '../../src/components/register/model-difference.ts';
import {
  blankModel,
  modelErrors,
  readModelForm,
  toModelForm,
} from '../../src/components/register/model-form.ts';

const model: RegressionModel = {
  form: 'regression',
  stepMs: 60_000,
  holdLimitMs: 600_000,
  intercept: 744.3829145,
  terms: [
    { tagId: 1, coefficient: 1.897683412 },
    { tagId: 2, coefficient: -0.0342 },
  ],
  residualSd: 6.176912345,
};
const fit: FitSummary = {
  from: '2026-10-02T22:00:00.000Z',
  to: '2026-11-10T23:00:00.000Z',
  samples: 120,
  residualSd: 6.18,
  rSquared: 0.85,
  conditionNumber: 1.2,
  intercept: { value: 744.38, standardError: 33 },
  terms: [
    { tagId: 1, tagName: 'TI-1401', coefficient: 1.8977, standardError: 0.11, low: 292, high: 315 },
    { tagId: 2, tagName: 'FI-1410', coefficient: -0.0342, standardError: 0.0085, low: 8, high: 11 },
  ],
  collinear: [],
  notUsed: [],
};
const nameOf = (tagId: number) => ({ 1: 'TI-1401', 2: 'FI-1410', 3: 'PI-1420' })[tagId]!;

describe('a coefficient', () => {
  test('has the digits of its standard error, two figures of it', () => {
    expect(coefficientWords(1.897683412, 0.1134)).toBe('1.90 ± 0.11');
    expect(coefficientWords(744.38, 33.2)).toBe('744 ± 33');
    expect(coefficientWords(-0.034212, 0.0085)).toBe('−0.0342 ± 0.0085');
  });

  test('has four figures of its own where no standard error is known', () => {
    expect(coefficientWords(2.2, null)).toBe('2.200');
    expect(coefficientWords(12345.6, null)).toBe('12,346');
    expect(coefficientWords(0, null)).toBe('0');
  });
});

describe('a model in words', () => {
  test('reads as an equation with its signs before the addends', () => {
    expect(modelWords(model, fit, nameOf)).toBe('744 + 1.90 × TI-1401 − 0.0342 × FI-1410');
    expect(modelWords({ form: 'external', holdLimitMs: 1, residualSd: null }, null, nameOf)).toBe(
      'Computed elsewhere; arrives as readings',
    );
  });
});

describe('the form of a model', () => {
  test('shows figures without digits that mean nothing, and keeps them exact while untouched', () => {
    const form = toModelForm(model);
    expect(form.terms[0]!.coefficient).toBe('1.89768');
    expect(readModelForm(form)).toEqual({ model });
  });

  test('takes a figure as typed once it was changed', () => {
    const form = toModelForm(model);
    form.terms[0]!.coefficient = '1.9';
    expect(readModelForm(form)).toEqual({
      model: { ...model, terms: [{ tagId: 1, coefficient: 1.9 }, model.terms[1]] },
    });
  });

  test('says what is missing or cannot be used, field by field', () => {
    const form = {
      ...blankModel(),
      intercept: '',
      residualSd: '0',
      hold: { amount: '9', per: 'd' as const },
    };
    expect(readModelForm({ ...form, terms: [{ tagId: 1, coefficient: '1,5' }] })).toEqual({
      errors: {
        intercept: 'Write it; 0 until it is fitted.',
        residualSd: 'An SD is above 0.',
        hold: 'Hold a reading for at most 7 days.',
        'terms.0.coefficient': 'Write 1.5 or 15: a comma can mean either.',
      },
    });
    expect(readModelForm(blankModel())).toEqual({ errors: { terms: 'Choose at least one input.' } });
  });

  test('finds the fields that a reply of the server names', () => {
    expect(modelErrors({ 'model.terms.1.tagId': 'In already.', 'model.stepMs': 'Too short.' })).toEqual({
      'terms.1.tagId': 'In already.',
      step: 'Too short.',
    });
  });
});

describe('two models side by side', () => {
  const says = (tagId: number | null) => (tagId === null ? 'Intercept' : nameOf(tagId));

  test('show each figure, its change, and inputs that came or went', () => {
    const before: RegressionModel = {
      ...model,
      intercept: 640,
      terms: [
        { tagId: 1, coefficient: 2.2 },
        { tagId: 3, coefficient: 5 },
      ],
      residualSd: null,
    };
    const rows = modelDifference({ model: before, fit: null }, { model, fit }, says, '°C');
    const changes = Object.fromEntries(rows.map(({ what, change }) => [what, change]));
    expect(changes).toEqual({
      Form: '',
      Intercept: '+104',
      'TI-1401': '−0.30',
      'FI-1410': 'new input',
      'PI-1420': 'left out',
      'Computed every': '',
      'A reading holds for': '',
      'SD of a single error, °C': 'changed',
      'Fitted on': 'changed',
    });
    expect(rows.find(({ what }) => what === 'TI-1401')).toMatchObject({
      inForce: '2.200',
      proposed: '1.90 ± 0.11',
    });
  });

  test('say nothing of change where there was no model before', () => {
    const rows = modelDifference(null, { model, fit }, says, '°C');
    expect(rows.every(({ change, inForce }) => change === '' && inForce === '–')).toBe(true);
  });
});
