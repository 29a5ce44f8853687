import { describe, expect, test } from 'vitest';
import { digestDay } from '../../../shared/rules/digest-time.ts';
import { addDays } from '../../../shared/rules/due-dates.ts';
import { stagesReached, toldAt } from '../../../shared/rules/reminder-stages.ts';

const dueOn = '2026-12-08';
const at = (late: number) => addDays(dueOn, late);
const recalibration = { kind: 'recalibration' as const, dueOn, openedOn: '2026-06-08' };

describe('stages', () => {
  test('are reached 30 and 7 days before, on the day, 7 and 14 days after, then weekly', () => {
    const reachedOn: [number, number[]][] = [];
    for (let late = -40; late <= 36; late++) {
      const before = stagesReached(recalibration, at(late - 1)).length;
      const now = stagesReached(recalibration, at(late));
      if (now.length > before) reachedOn.push([late, now.slice(before)]);
    }
    expect(reachedOn).toEqual([-30, -7, 0, 7, 14, 21, 28, 35].map((stage) => [stage, [stage]]));
  });

  test('before it was opened are skipped, except the latest one reached by then', () => {
    const openedLate = { ...recalibration, openedOn: at(-3) };
    expect(stagesReached(openedLate, at(-3))).toEqual([-7]);
    expect(stagesReached(openedLate, at(0))).toEqual([-7, 0]);
    expect(stagesReached({ ...recalibration, openedOn: at(40) }, at(40))).toEqual([35]);
    expect(stagesReached({ ...recalibration, openedOn: at(-7) }, at(-7))).toEqual([-7]);
    expect(stagesReached({ ...recalibration, openedOn: at(-50) }, at(-31))).toEqual([]);
  });

  test('of a gap begin on the day it opened', () => {
    const gap = { kind: 'ownership-gap' as const, dueOn, openedOn: dueOn };
    expect(stagesReached(gap, at(0))).toEqual([0]);
    expect(stagesReached(gap, at(22))).toEqual([0, 7, 14, 21]);
    expect(stagesReached({ ...gap, openedOn: at(-20) }, at(-1))).toEqual([]);
  });
});

describe('who is told', () => {
  const people = { attendants: [3], ownerId: 3, deputyId: 4, managers: [8, 9] };

  test('the owner until it is a week late, then the deputy too, and the managers after two', () => {
    expect([-30, -7, 0].map((stage) => toldAt('review', stage, people))).toEqual([[3], [3], [3]]);
    expect(toldAt('review', 7, people)).toEqual([3, 4]);
    expect(toldAt('review', 14, people)).toEqual([3, 4, 8, 9]);
    expect(toldAt('review', 28, people)).toEqual([3, 4, 8, 9]);
  });

  test('whom it was given to instead of the owner, who hears of it when it is late', () => {
    const given = { ...people, attendants: [5] };
    expect(toldAt('recalibration', 0, given)).toEqual([5]);
    expect(toldAt('recalibration', 7, given)).toEqual([5, 3, 4]);
  });

  test('of a gap the managers alone', () => {
    expect(toldAt('ownership-gap', 0, people)).toEqual([8, 9]);
  });

  test('nobody twice, and nobody who is not there', () => {
    const alone = { attendants: [8], ownerId: null, deputyId: null, managers: [8] };
    expect(toldAt('review', 14, alone)).toEqual([8]);
  });
});

describe('a digest', () => {
  const zone = 'Asia/Kolkata';
  const local = (text: string) => new Date(`${text}+05:30`);
  const facts = { zone, oldestAt: local('2026-12-01T00:10:00'), last: null };
  const day = (now: string, own: Partial<Parameters<typeof digestDay>[0]> = {}) =>
    digestDay({ ...facts, now: local(now), ...own });

  test('is written from 07:00 on by the clock of the site', () => {
    expect(day('2026-12-01T06:59:00')).toBeNull();
    expect(day('2026-12-01T07:00:00')).toBe('2026-12-01');
    expect(day('2026-12-01T10:00:00', { oldestAt: local('2026-12-01T09:55:00') })).toBe('2026-12-01');
  });

  test('waits for the next morning with what came after noon, but never with what a morning missed', () => {
    const oldestAt = local('2026-12-01T14:00:00');
    expect(day('2026-12-01T14:10:00', { oldestAt })).toBeNull();
    expect(day('2026-12-02T07:00:00', { oldestAt })).toBe('2026-12-02');
    expect(day('2026-12-01T14:10:00')).toBe('2026-12-01');
  });

  test('comes once a day, by when it is written and by when it arrives', () => {
    const last = (on: string, sentAt: Date | null) => ({ last: { day: on, sentAt } });
    expect(day('2026-12-01T08:00:00', last('2026-12-01', local('2026-12-01T07:01:00')))).toBeNull();
    expect(day('2026-12-01T08:00:00', last('2026-11-30', local('2026-11-30T07:01:00')))).toBe('2026-12-01');
    expect(day('2026-12-01T08:00:00', last('2026-11-30', null))).toBeNull();
    expect(day('2026-12-01T08:00:00', last('2026-11-30', local('2026-12-01T02:00:00')))).toBeNull();
  });
});
