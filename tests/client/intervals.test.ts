import { afterEach, describe, expect, test } from 'vitest';
import type { Interval } from '../../shared/contracts/interval.ts';
import IntervalField from '../../src/components/register/IntervalField.vue';
import { intervalWords, readInterval, splitInterval } from '../../src/components/register/intervals.ts';
import { readForm, toForm, withClass } from '../../src/components/register/sheet-form.ts';
import { mayBe, peopleChoices } from '../../src/components/register/sheet-people.ts';
import { sheetFields } from '../support/sheet-fields.ts';
import { mountPart } from './mount-part.ts';

afterEach(() => (document.body.innerHTML = ''));

const quarterly: Interval = { every: 3, unit: 'months', counted: 'last-done', anchorOn: null };
const fromJanuary: Interval = { every: 30, unit: 'days', counted: 'anchored', anchorOn: '2026-01-31' };
const typed = (own: Partial<ReturnType<typeof splitInterval>>) => ({ ...splitInterval(quarterly), ...own });

describe('an interval', () => {
  test('comes back as it was, counted either way', () => {
    for (const interval of [quarterly, fromJanuary])
      expect(readInterval(splitInterval(interval))).toEqual({ interval });
  });

  test('of zero, of a fraction or of too long is refused at the number', () => {
    const wrong = (every: string, unit: Interval['unit'] = 'months') =>
      (readInterval(typed({ every, unit })) as { wrong: { every?: string } }).wrong.every;
    expect(wrong('0')).toContain('at least 1');
    expect(wrong('1.5')).toBe('Write a whole number.');
    expect(wrong('')).toBe('Write after how many months.');
    expect(wrong('many')).toContain('no number');
    expect(wrong('121')).toBe('Keep the interval within 120 months.');
    expect(readInterval(typed({ every: '121', unit: 'days' }))).toHaveProperty('interval');
  });

  test('from a fixed day names the day that is missing or does not exist', () => {
    const wrong = (own: object) =>
      (readInterval(typed({ counted: 'anchored', ...own })) as { wrong: { anchorOn?: string } }).wrong
        .anchorOn;
    expect(wrong({})).toBe('Write the day that it counts from.');
    expect(wrong({ noSuchDay: true })).toContain('a day that exists');
    expect(wrong({ anchorOn: '2026-02-31' })).toContain('a day that exists');
    expect(wrong({ every: '0' })).toBe('Write the day that it counts from.');
  });

  test('forgets the fixed day once it counts from when it was last done', () => {
    const read = readInterval({ ...splitInterval(fromJanuary), counted: 'last-done' });
    expect(read).toEqual({ interval: { ...fromJanuary, counted: 'last-done', anchorOn: null } });
  });

  test('says what it counts from', () => {
    expect(intervalWords({ ...quarterly, every: 1 })).toBe('1 month after it was last done');
    expect(intervalWords(fromJanuary)).toBe('30 days from 31 Jan 2026 on, whenever it is done');
  });

  test('shows its errors at the field and marks the part at fault alone', () => {
    const part = mountPart(IntervalField, {
      props: {
        modelValue: splitInterval(fromJanuary),
        label: 'Review every',
        errors: { anchorOn: 'Write a day that exists, such as 2026-11-29.' },
      },
    });
    expect(part.get('[role=alert]').text()).toContain('a day that exists');
    expect(part.get('.day').classes()).toContain('q-field--error');
    expect(part.get('.every').classes()).not.toContain('q-field--error');
  });
});

describe('the form of a data sheet', () => {
  test('says each wrong part of an interval once, beside the other fields at fault', () => {
    const form = toForm(sheetFields({ unitId: 4, rangeLow: 5, rangeHigh: 2 }));
    const wrong = typed({ every: 'many' });
    const read = readForm({
      ...form,
      recalibrationInterval: wrong,
      reviewInterval: typed({ every: '0', counted: 'anchored' }),
    });
    const { errors } = read as { errors: Record<string, string> };
    expect(Object.keys(errors).sort()).toEqual([
      'rangeHigh',
      'recalibrationInterval',
      'recalibrationInterval.every',
      'reviewInterval',
      'reviewInterval.anchorOn',
      'reviewInterval.every',
    ]);
    expect(errors['recalibrationInterval.every']).toBe('“many” is no number. One looks like 12.5.');
  });

  test('leaves an interval counted from a fixed day alone when the class changes', () => {
    const form = toForm(sheetFields({ unitId: 4, importanceClass: 'B' }));
    const anchored = { ...form, recalibrationInterval: splitInterval(fromJanuary) };
    expect(withClass(anchored, 'C').recalibrationInterval).toEqual(splitInterval(fromJanuary));
    expect(withClass(form, 'C').recalibrationInterval.every).toBe('12');
  });
});

describe('the people of a data sheet', () => {
  const people = [
    { id: 1, name: 'Marco Castellane', roles: ['engineer' as const] },
    { id: 2, name: 'Ines Okafor-Lund', roles: ['manager' as const] },
    { id: 3, name: 'Tove Halbrook', roles: ['technician' as const] },
  ];
  const named = (field: Parameters<typeof peopleChoices>[0], id: number | null) =>
    peopleChoices(field, people, [{ id: 9, name: 'Hanne Solberg' }], id).map(({ label }) => label);

  test('are offered by the role that their part needs', () => {
    expect(named('ownerId', null)).toEqual(['Marco Castellane']);
    expect(named('approverId', null)).toEqual(['Marco Castellane', 'Ines Okafor-Lund']);
  });

  test('stay named where their role is gone, with a sentence that says so', () => {
    expect(named('deputyId', 3)).toContain('Tove Halbrook');
    expect(named('ownerId', 9)).toContain('Hanne Solberg');
    expect(mayBe('deputyId', people, 3)).toContain('must be a process engineer of the site');
    expect(mayBe('ownerId', people, 9)).toContain('Choose somebody who is');
    expect(mayBe('ownerId', people, 1)).toBeNull();
    expect(mayBe('ownerId', people, null)).toBeNull();
  });
});
