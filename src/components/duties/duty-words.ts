import type { Duty, DutyKind, ReviewAnswers, ReviewConclusion } from '../../../shared/contracts/duties.ts';
import type { CalibrationKind } from '../../../shared/contracts/calibration-evidence.ts';
import { formatDate, formatDay, plural } from '../../../shared/rules/format.ts';
import { dutyWords, sensorWords } from '../../../shared/rules/duty-sentences.ts';
import { kindWords as calibrationWords } from '../../../shared/rules/recalibration-sentences.ts';
import type { OwnerPart } from '../../../shared/contracts/ownership.ts';
import { gapWords, missingParts, nameWords } from '../ownership/ownership-words.ts';

export const kindChoices = [
  { value: '', label: 'All duties' },
  { value: 'recalibration', label: 'Recalibrations' },
  { value: 'review', label: 'Reviews' },
  { value: 'ownership-gap', label: 'Ownership gaps' },
];
export const conclusionWords: Record<ReviewConclusion, string> = {
  keep: 'Keep it as it is',
  change: 'Change it',
  retire: 'Retire it',
};
/** The five questions of a review, as a person answers them. */
export const reviewQuestions: { part: keyof ReviewAnswers; label: string; asks: string }[] = [
  { part: 'purpose', label: 'Purpose', asks: 'It is still needed for what the sheet says.' },
  {
    part: 'consumers',
    label: 'Consumers',
    asks: 'Everything that uses it stands on the sheet; the class fits.',
  },
  {
    part: 'inputs',
    label: 'Inputs',
    asks: 'Each input is still measured there, in that range, as the model expects.',
  },
  { part: 'validity', label: 'Validity region', asks: 'The plant still runs where the model was built.' },
  { part: 'owner', label: 'Owner', asks: 'Owner and deputy know the model and have time for it.' },
];

/** What is to be done: "Recalibration", "Name an owner". */
export const taskWords = ({ kind, gaps }: Pick<Duty, 'kind' | 'gaps'>): string =>
  gaps.length > 0 ? nameWords(gaps) : `${dutyWords[kind][0]!.toUpperCase()}${dutyWords[kind].slice(1)}`;

/** "9 days late", "today", "in 7 days". */
export function dueWords(daysLate: number): string {
  if (daysLate > 0) return `${plural(daysLate, 'day')} late`;
  if (daysLate === 0) return 'today';
  return daysLate === -1 ? 'tomorrow' : `in ${plural(-daysLate, 'day')}`;
}

/** A gap that was put off began some day before the duty that stands for it now. */
const putOff = ({ kind, dueOn, openedOn }: Duty) => kind === 'ownership-gap' && dueOn !== openedOn;

/** When it is due, or for a gap what is missing and since when. */
export function whenWords(duty: Duty): string {
  if (duty.gaps.length === 0) return dueWords(duty.daysLate);
  const { gaps: codes, openedOn } = duty;
  const missing = gapWords({ ...duty, codes, since: putOff(duty) ? null : openedOn });
  return putOff(duty) ? `${missing}; put off, ${dueWords(duty.daysLate)}` : missing;
}

/** The line under the heading of what is asked for a duty. */
export const aboutWords = (duty: Duty): string => {
  const due =
    duty.gaps.length > 0 ? whenWords(duty) : `Due ${dayWords(duty.dueOn, duty.today)}, ${whenWords(duty)}`;
  return `${duty.name}, ${duty.unitName}, ${duty.siteName}. ${due}.`;
};

/** Late, or a gap that is not put off: what has to stand out by its weight. */
export const presses = (duty: Duty): boolean =>
  duty.state === 'open' && ['Late', NOBODY].includes(groupOf(duty));

export const dayWords = (date: string, today: string): string => formatDay(date, 'UTC', `${today}T12:00:00Z`);

const NOBODY = 'Without owner or deputy';
const WEEK = 7;
const MONTH = 30;
/** Under which heading an open duty stands. */
export function groupOf(duty: Pick<Duty, 'daysLate' | 'kind'>): string {
  // A gap is there from its first day on; there is nothing to wait for.
  if (duty.kind === 'ownership-gap' && duty.daysLate >= 0) return NOBODY;
  if (duty.daysLate > 0) return 'Late';
  if (-duty.daysLate <= WEEK) return 'Within a week';
  return -duty.daysLate <= MONTH ? 'Within 30 days' : 'Later';
}

function counted(rows: readonly Duty[]): string {
  const here = (Object.keys(dutyWords) as DutyKind[]).filter((kind) => rows.some((row) => row.kind === kind));
  return here
    .map((kind) => plural(rows.filter((row) => row.kind === kind).length, dutyWords[kind]))
    .join(' and ');
}

/** "2 soft sensors without an owner and 13 without a deputy". */
function gapsCounted(rows: readonly Duty[]): string {
  const missing = (part: OwnerPart) => rows.filter(({ gaps }) => missingParts(gaps)[0] === part).length;
  const [owner, deputy] = [missing('owner'), missing('deputy')];
  if (owner + deputy < rows.length) return counted(rows);
  if (owner === 0) return `${plural(deputy, 'soft sensor')} without a deputy`;
  const others = deputy === 0 ? '' : ` and ${deputy} without a deputy`;
  return `${plural(owner, 'soft sensor')} without an owner${others}`;
}

export interface DutyCounts {
  total: number;
  late: number;
  dueToday: number;
  dueSoon: number;
}

/**
 * The finding of the page: "2 recalibrations late, 1 review due within a week". Rows are loaded in order of their dates;
 * where what is late and near does not all stand among them, only the counts are certain.
 */
export function dutiesHeadline(rows: readonly Duty[], counts: DutyCounts): string {
  const furthest = rows.at(-1);
  const known = rows.length >= counts.total || (furthest !== undefined && groupOf(furthest) === 'Later');
  if (!known)
    return `${plural(counts.late, 'duty', 'duties')} late, ${counts.dueSoon} more due within 30 days`;
  const inGroup = (name: string) => rows.filter((row) => groupOf(row) === name);
  const [late, gaps, near] = [inGroup('Late'), inGroup(NOBODY), inGroup('Within a week')];
  const parts = [
    ...(late.length > 0 ? [`${counted(late)} late`] : []),
    ...(gaps.length > 0 ? [gapsCounted(gaps)] : []),
    ...(near.length > 0 ? [`${counted(near)} due within a week`] : []),
  ];
  if (parts.length > 0) return parts.join(', ');
  const soon = inGroup('Within 30 days');
  return soon.length > 0 ? `${counted(soon)} due within 30 days` : 'Nothing is due in the next 30 days';
}

/** "Next: review of TY-1402 Crown temperature on 14 Mar 2027, in 103 days." */
export function nextWords(duty: Duty): string {
  return `Next: ${dutyWords[duty.kind]} of ${sensorWords(duty)} on ${formatDate(duty.dueOn, duty.siteZone)}, ${dueWords(duty.daysLate)}.`;
}

export interface LastWords {
  what: string;
  when: string;
  /** Where its record can be read. */
  to: string | null;
}

/** What was decided the last time, when and by whom. */
export function lastWords({ lastDecision: last, siteZone, today, softSensorId }: Duty): LastWords | null {
  if (last === null) return null;
  const day = formatDay(last.at, siteZone, `${today}T12:00:00Z`);
  const when = last.by === null ? day : `${day}, ${last.by.name}`;
  if (last.what === 'calibration') {
    const kind = calibrationWords[last.kind as CalibrationKind] ?? 'Recalibrated';
    return { what: kind, when, to: `/calibrations/${last.calibrationId}` };
  }
  if (last.what === 'review')
    return { what: conclusionWords[last.conclusion], when, to: `/register/${softSensorId}/sheet#reviews` };
  return { what: `Waived: “${last.reason}”`, when, to: null };
}

/** Who attends to it; the many managers of a site are not all named. */
export function assigneeWords({ assignees, kind, siteName }: Duty): string {
  if (assignees.length === 0) return kind === 'ownership-gap' ? `no manager at ${siteName}` : 'nobody';
  const [first, second, ...others] = assignees.map(({ name }) => name);
  if (others.length > 0) return `${first} and ${others.length + 1} more`;
  return second === undefined ? first! : `${first} or ${second}`;
}

const endings = {
  done: 'done',
  waived: 'waived',
  filled: 'filled',
  dropped: 'no longer needed',
} as const;
/** How a closed duty ended: "done 8 Sep by Marco Castellane". */
export function endWords({ closedAs, closedAt, closedBy, siteZone, today }: Duty): string {
  if (closedAs === null || closedAt === null) return '';
  const day = formatDay(closedAt, siteZone, `${today}T12:00:00Z`);
  return `${endings[closedAs]} ${day}${closedBy ? ` by ${closedBy.name}` : ''}`;
}
