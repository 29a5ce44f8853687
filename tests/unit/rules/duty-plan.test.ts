import { describe, expect, test } from 'vitest';
import type { Interval } from '../../../shared/contracts/interval.ts';
import { type DutyFacts, type OpenDuty, ownershipGaps, planDuties } from '../../../shared/rules/duty-plan.ts';
import { type DutyRightsFacts, dutyRights, waiverRefusal } from '../../../shared/rules/duty-rights.ts';
import { dueWords, dutySentence, lastDecisionWords } from '../../../shared/rules/duty-sentences.ts';

const interval = (every: number): Interval => ({
  every,
  unit: 'months',
  counted: 'last-done',
  anchorOn: null,
});
const openedAt = new Date('2026-09-08T08:00:00Z');
const open = (own: Partial<OpenDuty> = {}): OpenDuty => ({
  id: 1,
  openedAt,
  dueOn: '2026-12-08',
  assigneeId: null,
  dateStands: false,
  told: false,
  ...own,
});

const settled: DutyFacts = {
  today: '2026-12-01',
  kept: true,
  inServiceOn: '2026-09-08',
  recalibration: { interval: interval(3), last: null, open: open() },
  review: { interval: interval(12), last: null, open: open({ id: 2, dueOn: '2027-09-08' }) },
  gap: { codes: [], open: null },
};
const plan = (own: Partial<DutyFacts>) => planDuties({ ...settled, ...own });
const recalibration = (own: Partial<DutyFacts['recalibration']>) => ({
  recalibration: { ...settled.recalibration, ...own },
});

describe('the duties of a soft sensor', () => {
  test('need nothing where all is as it should be', () => {
    expect(plan({})).toEqual([]);
  });

  test('open both when it comes into service, counted from that day', () => {
    const fresh = plan({
      recalibration: { ...settled.recalibration, open: null },
      review: { ...settled.review, open: null },
    });
    expect(fresh).toEqual([
      { do: 'open', kind: 'recalibration', dueOn: '2026-12-08', assigneeId: null },
      { do: 'open', kind: 'review', dueOn: '2027-09-08', assigneeId: null },
    ]);
  });

  test('close with the record that attended to them and open the next from that day', () => {
    const at = new Date('2026-12-01T09:00:00Z');
    const last = { recordId: 7, at, on: '2026-12-01', by: 5, dueOn: null };
    expect(plan(recalibration({ last }))).toEqual([
      { do: 'close', kind: 'recalibration', dutyId: 1, at, by: 5, recordId: 7, reason: '' },
      { do: 'open', kind: 'recalibration', dueOn: '2027-03-01', assigneeId: null },
    ]);
    const next = open({ id: 3, openedAt: at, dueOn: '2027-03-01' });
    expect(plan(recalibration({ last: { ...last, dueOn: '2026-12-08' }, open: next }))).toEqual([]);
  });

  test('move with the interval, by a duty of their own where somebody was told of the old date', () => {
    const longer = { interval: interval(6) };
    expect(plan(recalibration(longer))).toEqual([
      { do: 'move', kind: 'recalibration', dutyId: 1, dueOn: '2027-03-08' },
    ]);
    expect(plan(recalibration({ ...longer, open: open({ told: true, assigneeId: 4 }) }))).toMatchObject([
      { do: 'close', dutyId: 1, recordId: null, reason: expect.stringContaining('2027-03-08') },
      { do: 'open', dueOn: '2027-03-08', assigneeId: 4 },
    ]);
    expect(plan(recalibration({ ...longer, open: open({ dateStands: true }) }))).toEqual([]);
  });

  test('end when it is retired', () => {
    expect(plan({ kept: false, gap: { codes: ['no-owner'], open: open({ id: 9 }) } })).toMatchObject([
      { do: 'close', dutyId: 1 },
      { do: 'close', dutyId: 2 },
      { do: 'close', dutyId: 9 },
    ]);
  });

  test('have a gap as long as there is one', () => {
    expect(plan({ gap: { codes: ['no-owner'], open: null } })).toEqual([
      { do: 'open', kind: 'ownership-gap', dueOn: '2026-12-01', assigneeId: null },
    ]);
    expect(plan({ gap: { codes: ['no-owner'], open: open({ id: 9 }) } })).toEqual([]);
    expect(plan({ gap: { codes: [], open: open({ id: 9 }) } })).toMatchObject([{ do: 'close', dutyId: 9 }]);
  });
});

describe('an ownership gap', () => {
  const fine = { active: true, engineer: true };
  test('is an owner who is missing, deactivated or no engineer, and for A and B such a deputy', () => {
    expect(ownershipGaps('A', fine, fine)).toEqual([]);
    expect(ownershipGaps('C', fine, null)).toEqual([]);
    expect(ownershipGaps('B', fine, null)).toEqual(['no-deputy']);
    expect(ownershipGaps('A', null, { active: false, engineer: true })).toEqual([
      'no-owner',
      'deputy-deactivated',
    ]);
    expect(ownershipGaps('C', { active: true, engineer: false }, null)).toEqual(['owner-no-engineer']);
    expect(ownershipGaps('A', { active: false, engineer: false }, { active: true, engineer: false })).toEqual(
      ['owner-deactivated', 'deputy-no-engineer'],
    );
  });
});

describe('rights on a duty', () => {
  const duty: DutyRightsFacts = {
    kind: 'recalibration',
    siteId: 1,
    open: true,
    ownerId: 3,
    deputyId: 4,
    approverId: 5,
    assigneeId: null,
  };
  const who = (id: number, ...roles: ('engineer' | 'manager' | 'reader')[]) => ({
    id,
    administrator: false,
    roles: roles.map((role) => ({ siteId: 1, role })),
  });

  test('to waive: a manager or the approver, never whose duty it is', () => {
    expect(waiverRefusal(who(9, 'manager'), duty)).toBeNull();
    expect(waiverRefusal(who(5, 'engineer'), duty)).toBeNull();
    expect(waiverRefusal(who(3, 'engineer', 'manager'), duty)).toBe('own-duty');
    expect(waiverRefusal(who(6, 'engineer', 'manager'), { ...duty, assigneeId: 6 })).toBe('own-duty');
    expect(waiverRefusal(who(4, 'engineer'), duty)).toBe('not-approver');
    expect(waiverRefusal(who(5, 'engineer'), { ...duty, kind: 'ownership-gap' })).toBe('not-approver');
  });

  test('to attend and to give away', () => {
    expect(dutyRights(who(3, 'engineer'), duty)).toEqual({
      mayAttend: true,
      mayWaive: false,
      mayReassign: true,
    });
    expect(dutyRights(who(9, 'manager'), duty)).toEqual({
      mayAttend: false,
      mayWaive: true,
      mayReassign: true,
    });
    expect(dutyRights(who(7, 'engineer'), duty)).toMatchObject({ mayAttend: true, mayReassign: false });
    expect(dutyRights(who(7, 'reader'), duty)).toEqual({
      mayAttend: false,
      mayWaive: false,
      mayReassign: false,
    });
    const closed = { ...duty, open: false };
    expect(dutyRights(who(9, 'manager'), closed)).toEqual({
      mayAttend: false,
      mayWaive: false,
      mayReassign: false,
    });
  });
});

describe('sentences', () => {
  const duty = {
    kind: 'recalibration' as const,
    dueOn: '2026-12-08',
    today: '2026-12-01',
    siteZone: 'Europe/Copenhagen',
    tagName: 'TY-1402',
    name: 'Crown interior temperature',
    gaps: [],
  };
  test('say what is due and when', () => {
    expect(dutySentence(duty, -7)).toBe(
      'Recalibration of TY-1402 Crown interior temperature is due on 8 Dec, in 7 days.',
    );
    expect(dutySentence({ ...duty, today: '2026-12-17' }, 9)).toBe(
      'Recalibration of TY-1402 Crown interior temperature is 9 days late, due on 8 Dec.',
    );
    expect(dueWords(duty, -1)).toBe('is due tomorrow, 8 Dec');
    expect(dueWords(duty, 0)).toBe('is due today');
    expect(dueWords({ ...duty, dueOn: '2027-01-08' }, -38)).toBe('is due on 8 Jan 2027, in 38 days');
    expect(dueWords(duty, 1)).toBe('is 1 day late, due on 8 Dec');
  });

  test('say what is missing in the ownership', () => {
    const gap = {
      ...duty,
      kind: 'ownership-gap' as const,
      gaps: ['owner-deactivated' as const, 'no-deputy' as const],
    };
    expect(dutySentence(gap, 3)).toBe(
      'TY-1402 Crown interior temperature has an owner who was deactivated and has no deputy for 3 days. Name somebody.',
    );
    expect(dutySentence({ ...gap, gaps: ['no-owner'] }, 0)).toBe(
      'TY-1402 Crown interior temperature has no owner. Name somebody.',
    );
  });

  test('say what was decided the last time', () => {
    const at = '2026-09-08T08:00:00.000Z';
    const by = { id: 5, name: 'Ines Okafor-Lund' };
    const zone = 'Europe/Copenhagen';
    expect(lastDecisionWords({ what: 'calibration', calibrationId: 7, kind: 'as-found', at, by }, zone)).toBe(
      'Left as found on 8 Sep 2026 by Ines Okafor-Lund',
    );
    expect(
      lastDecisionWords({ what: 'calibration', calibrationId: 7, kind: 'bias', at, by: null }, zone),
    ).toBe('Corrected on 8 Sep 2026');
    expect(lastDecisionWords({ what: 'review', reviewId: 2, conclusion: 'change', at, by }, zone)).toBe(
      'Reviewed on 8 Sep 2026 by Ines Okafor-Lund: to be changed',
    );
    expect(lastDecisionWords(null, zone)).toBe('Nothing decided yet');
  });
});
