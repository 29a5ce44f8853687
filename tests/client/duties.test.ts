import { afterEach, describe, expect, test } from 'vitest';
import type { Duty } from '../../shared/contracts/duties.ts';
import { exampleSheet } from '../../shared/contracts/register-examples.ts';
import {
  assigneeWords,
  dueWords,
  dutiesHeadline,
  endWords,
  groupOf,
  lastWords,
  nextWords,
  presses,
  taskWords,
  whenWords,
} from '../../src/components/duties/duty-words.ts';
import DutyActions from '../../src/components/duties/DutyActions.vue';
import { readReview, sheetAnswers } from '../../src/components/duties/review-form.ts';
import { dutyRow } from '../support/duty-rows.ts';
import { mountPart } from './mount-part.ts';

afterEach(() => (document.body.innerHTML = ''));

const gap = (own: Partial<Duty> = {}) =>
  dutyRow({
    kind: 'ownership-gap',
    daysLate: 17,
    openedOn: '2026-11-14',
    owner: { id: 6, name: 'Hanne Solberg' },
    gaps: ['owner-deactivated'],
    ...own,
  });
const headline = (rows: Duty[], total = rows.length, late = 0, dueSoon = 0) =>
  dutiesHeadline(rows, { total, late, dueToday: 0, dueSoon });

describe('when a duty is due', () => {
  test('is said in days before and after its date', () => {
    expect([9, 1, 0, -1, -7].map(dueWords)).toEqual([
      '9 days late',
      '1 day late',
      'today',
      'tomorrow',
      'in 7 days',
    ]);
  });

  test('sorts it under late, within a week, within 30 days or later', () => {
    const groups = [1, 0, -7, -8, -30, -31].map((daysLate) => groupOf(dutyRow({ daysLate })));
    expect(groups).toEqual([
      'Late',
      'Within a week',
      'Within a week',
      'Within 30 days',
      'Within 30 days',
      'Later',
    ]);
  });

  test('stands out only once it is late, and never when it is closed', () => {
    expect(presses(dutyRow({ daysLate: 1 }))).toBe(true);
    expect(presses(dutyRow({ daysLate: 0 }))).toBe(false);
    expect(presses(dutyRow({ daysLate: 40, state: 'done' }))).toBe(false);
  });
});

describe('an ownership gap', () => {
  test('says since when, who is missing and why', () => {
    expect(whenWords(gap())).toBe('No owner since 14 Nov: Hanne Solberg left');
    expect(whenWords(gap({ gaps: ['no-owner'], owner: null }))).toBe('No owner since 14 Nov');
    expect(whenWords(gap({ gaps: ['deputy-no-engineer'] }))).toBe(
      'No deputy since 14 Nov: Jun Brightwell is no engineer of Tarnby any more',
    );
  });

  test('names the task by the parts that are missing', () => {
    expect(taskWords(gap())).toBe('Name an owner');
    expect(taskWords(gap({ gaps: ['no-owner', 'no-deputy'] }))).toBe('Name an owner and a deputy');
  });

  test('presses from its first day on, but not while it is put off', () => {
    const first = gap({ daysLate: 0, openedOn: '2026-12-01' });
    expect([groupOf(first), presses(first)]).toEqual(['Without owner or deputy', true]);
    const putOff = gap({ daysLate: -20, openedOn: '2026-12-01' });
    expect([groupOf(putOff), presses(putOff)]).toEqual(['Within 30 days', false]);
    expect(whenWords(putOff)).toBe('No owner: Hanne Solberg left; put off, in 20 days');
  });
});

describe('the headline of the duties', () => {
  test('counts what is late and near by kind', () => {
    const rows = [
      gap(),
      dutyRow({ daysLate: 9 }),
      dutyRow({ daysLate: 4 }),
      dutyRow({ daysLate: -3, kind: 'review' }),
    ];
    expect(headline(rows)).toBe(
      '2 recalibrations late, 1 soft sensor without an owner, 1 review due within a week',
    );
    const deputies = [gap({ gaps: ['no-deputy'] }), gap({ gaps: ['deputy-deactivated'] })];
    expect(headline(deputies)).toBe('2 soft sensors without a deputy');
    expect(headline([gap(), ...deputies])).toBe('1 soft sensor without an owner and 2 without a deputy');
  });

  test('names what is due this month where nothing presses, and says so where nothing is due at all', () => {
    expect(headline([dutyRow({ daysLate: -20 }), dutyRow({ daysLate: -90 })])).toBe(
      '1 recalibration due within 30 days',
    );
    expect(headline([dutyRow({ daysLate: -90 })])).toBe('Nothing is due in the next 30 days');
    expect(headline([])).toBe('Nothing is due in the next 30 days');
  });

  test('keeps to the counts of the server while not all that is late is loaded', () => {
    expect(headline([dutyRow({ daysLate: 90 })], 400, 231, 12)).toBe(
      '231 duties late, 12 more due within 30 days',
    );
    const loaded = [dutyRow({ daysLate: 3 }), dutyRow({ daysLate: -31 })];
    expect(headline(loaded, 400, 1)).toBe('1 recalibration late');
  });

  test('comes with the next one', () => {
    const next = dutyRow({ daysLate: -40, kind: 'review' });
    expect(nextWords(next)).toBe(
      'Next: review of TY-1402 Crown interior temperature on 10 Jan 2027, in 40 days.',
    );
  });
});

describe('a line of the duties', () => {
  test('says what was decided last time, when and by whom, and where its record is', () => {
    expect(lastWords(dutyRow())).toEqual({
      what: 'Left as found',
      when: '8 Sep, Ines Okafor-Lund',
      to: '/calibrations/7',
    });
    const waived = {
      what: 'waiver' as const,
      reason: 'Kiln stood.',
      at: '2025-10-02T08:00:00.000Z',
      by: null,
    };
    expect(lastWords(dutyRow({ lastDecision: waived }))).toEqual({
      what: 'Waived: “Kiln stood.”',
      when: '2 Oct 2025',
      to: null,
    });
    expect(lastWords(dutyRow({ lastDecision: null }))).toBeNull();
  });

  test('names whom it is for, and not all of many managers', () => {
    const people = ['Ines', 'Jun', 'Marco'].map((name, id) => ({ id, name }));
    const words = (count: number) => assigneeWords(dutyRow({ assignees: people.slice(0, count) }));
    expect([0, 1, 2, 3].map(words)).toEqual(['nobody', 'Ines', 'Ines or Jun', 'Ines and 2 more']);
  });

  test('says how it ended, on the day at its site', () => {
    const closed = {
      state: 'done' as const,
      closedAs: 'filled' as const,
      closedAt: '2026-11-20T23:30:00.000Z',
    };
    expect(endWords(dutyRow({ ...closed, closedBy: { id: 4, name: 'Jun Brightwell' } }))).toBe(
      'filled 21 Nov by Jun Brightwell',
    );
  });

  test('offers only what the person who looks may do', async () => {
    const buttons = (own: Partial<Duty>) =>
      mountPart(DutyActions, { props: { duty: dutyRow(own), spread: true } })
        .findAll('button')
        .map((button) => button.text());
    const none = { mayAttend: false, mayWaive: false, mayReassign: false };
    expect(buttons({ ...none, kind: 'review' })).toEqual([]);
    expect(buttons({ ...none, kind: 'review', mayAttend: true })).toEqual(['Review']);
    expect(buttons({ ...none, mayWaive: true, mayReassign: true })).toEqual(['Waive', 'Reassign']);
    const part = mountPart(DutyActions, { props: { duty: gap({ ...none, mayAttend: true }), spread: true } });
    await part.get('button').trigger('click');
    expect(part.emitted('ask')).toEqual([['name']]);
  });
});

describe('a review', () => {
  const inOrder = { purpose: true, consumers: true, inputs: true, validity: true, owner: true };

  test('asks for each answer and for what follows from them', () => {
    const read = readReview({ answers: { purpose: true }, conclusion: null, note: '' });
    const { errors } = read as { errors: Record<string, string> };
    expect(Object.keys(errors).sort()).toEqual([
      'answers.consumers',
      'answers.inputs',
      'answers.owner',
      'answers.validity',
      'conclusion',
    ]);
  });

  test('wants a note where something is not in order or is to change', () => {
    const noteError = (inputs: boolean, conclusion: 'keep' | 'change') => {
      const read = readReview({ answers: { ...inOrder, inputs }, conclusion, note: '  ' });
      return 'errors' in read ? read.errors.note : null;
    };
    expect(noteError(true, 'keep')).toBeNull();
    expect(noteError(false, 'keep')).toContain('what is not in order');
    expect(noteError(true, 'change')).toContain('what is to be changed');
  });

  test('shows beside each question what the data sheet says', () => {
    const says = sheetAnswers(exampleSheet);
    expect(says.consumers).toContain('furnace pressure loop (closed loop)');
    expect(says.owner).toBe('Owner: Marco Castellane. Deputy: Jun Brightwell.');
    expect(sheetAnswers({ ...exampleSheet, deputy: null }).owner).toContain('Deputy: none');
  });
});
