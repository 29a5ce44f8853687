import type { DutyKind } from '../contracts/duties.ts';
import { daysBetween } from './due-dates.ts';

/** Days after the due date (negative: before) at which a stage of a duty is told; weekly after the last. */
const fixedStages = [-30, -7, 0, 7, 14] as const;
const week = 7;

/** From this stage on the deputy is told too, and from the next on the managers of the site. */
export const deputyStage = 7;
export const managerStage = 14;

/**
 * Stages of a duty that are reached at a date of the site, in their order. A duty that was opened late skips the stages
 * before, except the latest one reached by then: whoever has it must hear of it once. Gaps have no stage before day 0.
 * Days and escalation: decisions of this project, after common practice.
 */
export function stagesReached(
  duty: { kind: DutyKind; dueOn: string; openedOn: string },
  today: string,
): number[] {
  const late = daysBetween(duty.dueOn, today);
  const lateAtOpening = daysBetween(duty.dueOn, duty.openedOn);
  const reached: number[] = fixedStages.filter((stage) => stage <= late);
  for (let stage = managerStage + week; stage <= late; stage += week) reached.push(stage);
  const told = duty.kind === 'ownership-gap' ? reached.filter((stage) => stage >= 0) : reached;
  const atOpening = Math.max(...told.filter((stage) => stage <= lateAtOpening));
  return told.filter((stage) => stage >= lateAtOpening || stage === atOpening);
}

/** Whom a duty concerns: active people with a role at the site. */
export interface DutyPeople {
  /** Who must attend to it: the assignee or the owner; failing both the deputy, failing all the managers. */
  attendants: readonly number[];
  ownerId: number | null;
  deputyId: number | null;
  managers: readonly number[];
}

/** Who is told of a stage: those who must attend to it; owner and deputy when it is a week late, managers after two. */
export function toldAt(kind: DutyKind, stage: number, people: DutyPeople): number[] {
  if (kind === 'ownership-gap') return [...people.managers];
  const told = [...people.attendants];
  const add = (id: number | null) => {
    if (id !== null) told.push(id);
  };
  if (stage >= deputyStage) {
    add(people.ownerId);
    add(people.deputyId);
  }
  if (stage >= managerStage) told.push(...people.managers);
  return [...new Set(told)];
}
