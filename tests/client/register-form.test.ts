import { afterEach, describe, expect, test } from 'vitest';
import { nextTick } from 'vue';
import { readDuration, sayDuration, splitDuration } from '../../src/components/register/durations.ts';
import { readNumber } from '../../src/components/register/number-text.ts';
import { mergeSheets, resolveSheets } from '../../src/components/register/sheet-conflict.ts';
import {
  blankForm,
  classFor,
  readForm,
  toForm,
  withClass,
  type SheetForm,
} from '../../src/components/register/sheet-form.ts';
import { useKept } from '../../src/components/register/use-kept.ts';
import { sheetFields } from '../support/sheet-fields.ts';

const filled = (): SheetForm => toForm(sheetFields({ unitId: 4 }));

describe('a number as typed', () => {
  test('takes signs, exponents, spaces between thousands and the true minus sign', () => {
    expect(readNumber(' −15.3 ')).toEqual({ value: -15.3 });
    expect(readNumber('1 250.5')).toEqual({ value: 1250.5 });
    expect(readNumber('2e-4')).toEqual({ value: 0.0002 });
    expect(readNumber('  ')).toEqual({ value: null });
  });

  test('never guesses what a comma means', () => {
    expect(readNumber('1,234')).toEqual({ wrong: 'Write 1.234 or 1234: a comma can mean either.' });
    expect(readNumber('1,234.5')).toEqual({ wrong: 'Write it without commas.' });
  });

  test('says what was typed where it is no number', () => {
    expect(readNumber('ten')).toEqual({ wrong: '“ten” is no number. One looks like 12.5.' });
  });
});

describe('a duration', () => {
  test('is shown in the largest unit that leaves it whole', () => {
    expect(splitDuration(7_200_000)).toEqual({ amount: '2', per: 'h' });
    expect(splitDuration(5_400_000)).toEqual({ amount: '90', per: 'min' });
    expect(sayDuration(604_800_000)).toBe('7 d');
    expect(sayDuration(0)).toBe('0 min');
  });

  test('comes back as the milliseconds it was', () => {
    for (const ms of [0, 1000, 60_000, 86_400_000, 3 * 86_400_000, 90_061_000]) {
      expect(readDuration(splitDuration(ms))).toEqual({ ms });
    }
  });
});

describe('the form of a data sheet', () => {
  test('gives back the sheet it was made from', () => {
    const fields = sheetFields({
      unitId: 4,
      rangeLow: -5.5,
      allowedErrorPercent: 2,
      transportDelayMs: 1_500_000,
    });
    expect(readForm(toForm(fields))).toEqual({ fields });
  });

  test('says at every field what is missing', () => {
    const read = readForm(blankForm());
    expect(read).toHaveProperty('errors');
    const { errors } = read as { errors: Record<string, string> };
    expect(Object.keys(errors).sort()).toEqual([
      'allowedErrorAbsolute',
      'name',
      'quantity',
      'tagName',
      'unitId',
    ]);
    expect(errors.unitId).toBe('Choose the unit of plant.');
  });

  test('asks rules between fields even while another field cannot be read', () => {
    const read = readForm({ ...filled(), decimals: 'two', rangeLow: '10', rangeHigh: '5' });
    expect((read as { errors: Record<string, string> }).errors).toEqual({
      decimals: '“two” is no number. One looks like 12.5.',
      rangeHigh: 'The upper end of the range must be above the lower.',
    });
  });

  test('names the consumer that has no name', () => {
    const read = readForm({ ...filled(), consumers: [{ kind: 'closed-loop', name: ' ' }] });
    expect((read as { errors: Record<string, string> }).errors['consumers.0.name']).toBe(
      'Write what uses it.',
    );
  });

  test('sets intervals by class, but not one that a person changed', () => {
    const nine = { ...blankForm().reviewInterval, every: '9' };
    const form = { ...blankForm(), reviewInterval: nine };
    const asA = withClass(form, 'A');
    expect(asA).toMatchObject({
      importanceClass: 'A',
      recalibrationInterval: { every: '3', unit: 'months' },
      reviewInterval: nine,
      promisedReferenceMs: { amount: '2', per: 'd' },
    });
    const touched = withClass({ ...form, promisedReferenceMs: { amount: '36', per: 'h' } }, 'C');
    expect(touched.promisedReferenceMs).toEqual({ amount: '36', per: 'h' });
  });

  test('makes a closed loop, a release or an emission report class A', () => {
    expect(classFor([{ kind: 'display', name: 'control room' }])).toBe('B');
    expect(classFor([{ kind: 'emission-report', name: 'monthly report' }])).toBe('A');
  });
});

describe('two people on one data sheet', () => {
  const base = sheetFields({ unitId: 4 });

  test('lose nothing where they changed different fields', () => {
    const { merged, both } = mergeSheets(base, { ...base, decimals: 1 }, { ...base, purpose: 'Theirs' });
    expect(both).toEqual([]);
    expect(merged).toEqual({ ...base, decimals: 1, purpose: 'Theirs' });
  });

  test('are asked only about what both changed to different values', () => {
    const mine = { ...base, name: 'Mine', decimals: 1, unit: 'wt%' };
    const theirs = { ...base, name: 'Theirs', decimals: 1, ownerId: 7 };
    const { merged, both } = mergeSheets(base, mine, theirs);
    expect(both).toEqual(['name']);
    expect(merged).toMatchObject({ name: 'Mine', unit: 'wt%', ownerId: 7 });
    expect(resolveSheets(merged, theirs, { name: 'theirs' }).name).toBe('Theirs');
    expect(resolveSheets(merged, theirs, { name: 'yours' }).name).toBe('Mine');
  });
});

describe('what is being typed', () => {
  afterEach(() => sessionStorage.clear());

  test('is there again after a reload, until it is saved', async () => {
    const first = useKept('test', () => ({ name: '' }));
    expect(first.restored).toBe(false);
    first.kept.value.name = 'TY-1409';
    await nextTick();
    const again = useKept('test', () => ({ name: '' }));
    expect(again.restored).toBe(true);
    expect(again.kept.value.name).toBe('TY-1409');
    again.forget();
    expect(useKept('test', () => ({ name: '' })).kept.value.name).toBe('');
  });
});
