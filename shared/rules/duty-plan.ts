import type { DutyKind, GapCode } from '../contracts/duties.ts';
import type { Interval } from '../contracts/interval.ts';
import { nextDueOn } from './due-dates.ts';

/** A duty that stands open. */
export interface OpenDuty {
  id: number;
  openedAt: Date;
  dueOn: string;
  assigneeId: number | null;
  /** Its date was set with a reason when the one before was waived, so that no interval moves it. */
  dateStands: boolean;
  /** Somebody was told of a stage of it. */
  told: boolean;
}

/** The newest calibration or review of a soft sensor. */
export interface LastDone {
  recordId: number;
  at: Date;
  /** The same as a date at the site. */
  on: string;
  by: number | null;
  /** Due date of the duty that it closed; null where it closed none. */
  dueOn: string | null;
}

export interface Recurring {
  interval: Interval;
  last: LastDone | null;
  open: OpenDuty | null;
  /** The record that is being written right now: it closes the open duty, whatever the clocks say. */
  justDone?: number;
}

/** All that decides which duties of one soft sensor should be open. */
export interface DutyFacts {
  /** Today at the site. */
  today: string;
  /** In service or suspended; a draft and a retired one have no duties. */
  kept: boolean;
  /** The day at the site on which it first came into service. */
  inServiceOn: string | null;
  recalibration: Recurring;
  review: Recurring;
  gap: { codes: readonly GapCode[]; open: OpenDuty | null };
}

export type DutyChange =
  | {
      do: 'close';
      kind: DutyKind;
      dutyId: number;
      at: Date | null;
      by: number | null;
      recordId: number | null;
      reason: string;
    }
  | { do: 'open'; kind: DutyKind; dueOn: string; assigneeId: number | null }
  | { do: 'move'; kind: DutyKind; dutyId: number; dueOn: string };

/**
 * What must change so that the duties of a soft sensor are as its facts say: one open recalibration and one open review
 * while it is in service or suspended, and an ownership gap as long as there is one. Nothing where all is right, so that
 * it may be asked any number of times. Changes come in the order in which they can be carried out.
 */
export function planDuties(facts: DutyFacts): DutyChange[] {
  return [
    ...planRecurring('recalibration', facts, facts.recalibration),
    ...planRecurring('review', facts, facts.review),
    ...planGap(facts),
  ];
}

function planRecurring(
  kind: 'recalibration' | 'review',
  facts: DutyFacts,
  { interval, last, open, justDone }: Recurring,
): DutyChange[] {
  if (!facts.kept || facts.inServiceOn === null)
    return open ? [drop(kind, open, 'No longer in service.')] : [];
  const attends = open && last && (last.at > open.openedAt || last.recordId === justDone);
  const dueOn = nextDueOn(interval, {
    on: last?.on ?? facts.inServiceOn,
    first: last === null,
    dueOn: attends ? open.dueOn : (last?.dueOn ?? null),
  });
  const next: DutyChange = { do: 'open', kind, dueOn, assigneeId: null };
  if (!open) return [next];
  if (attends) {
    const { recordId, at, by } = last;
    return [{ do: 'close', kind, dutyId: open.id, at, by, recordId, reason: '' }, next];
  }
  if (open.dueOn === dueOn || open.dateStands) return [];
  if (!open.told) return [{ do: 'move', kind, dutyId: open.id, dueOn }];
  // Whoever was told of the old date must be told of the new one from its first stage on.
  return [
    drop(kind, open, `Due on ${dueOn} instead: the interval was changed.`),
    { ...next, assigneeId: open.assigneeId },
  ];
}

function planGap({ kept, today, gap: { codes, open } }: DutyFacts): DutyChange[] {
  const kind = 'ownership-gap';
  if (!kept) return open ? [drop(kind, open, 'No longer in service.')] : [];
  if (codes.length === 0) return open ? [drop(kind, open, '')] : [];
  return open ? [] : [{ do: 'open', kind, dueOn: today, assigneeId: null }];
}

const drop = (kind: DutyKind, open: OpenDuty, reason: string): DutyChange => ({
  do: 'close',
  kind,
  dutyId: open.id,
  at: null,
  by: null,
  recordId: null,
  reason,
});

/** Who is named for a part, as far as it decides on a gap. */
export interface Named {
  active: boolean;
  engineer: boolean;
}

/**
 * What is missing in the ownership of a soft sensor: an owner who is active and an engineer of the site, and for classes
 * A and B such a deputy.
 */
export function ownershipGaps(
  importanceClass: 'A' | 'B' | 'C',
  owner: Named | null,
  deputy: Named | null,
): GapCode[] {
  const codes: GapCode[] = [];
  if (!owner) codes.push('no-owner');
  else if (!owner.active) codes.push('owner-deactivated');
  else if (!owner.engineer) codes.push('owner-no-engineer');
  if (importanceClass === 'C') return codes;
  if (!deputy) codes.push('no-deputy');
  else if (!deputy.active) codes.push('deputy-deactivated');
  else if (!deputy.engineer) codes.push('deputy-no-engineer');
  return codes;
}
