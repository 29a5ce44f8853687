import type { DayOrder, EventKind } from '../../../shared/contracts/events.ts';
import { sayEventTime } from '../../../shared/rules/event-sentences.ts';
import { stops } from '../../../shared/rules/event-words.ts';
import { formatClock, formatDate, formatZoneInWords, wallClock } from '../../../shared/rules/format.ts';
import { createTimeReader } from '../../../shared/rules/local-time.ts';

/** A time typed on the clock of a site; `which` of the two where the clocks showed it twice. */
export interface TypedMoment {
  text: string;
  which: 'earlier' | 'later' | null;
}

export type MomentRead =
  { ok: true; at: string } | { ok: false; says: string; twice: { earlier: string; later: string } | null };

/** Reads what was typed on the clock of a zone as an instant, or says why it is none. */
export function readMoment({ text, which }: TypedMoment, zone: string): MomentRead {
  if (text.trim() === '') return { ok: false, says: 'Give the day and the time.', twice: null };
  const read = createTimeReader({ order: 'day-month-year', zone })(text);
  if (read.ok) return { ok: true, at: new Date(read.at).toISOString() };
  if (read.code !== 'double-hour') return { ok: false, says: sayEventTime(read, zone), twice: null };
  const twice = { earlier: String(read.figures.earlier), later: String(read.figures.later) };
  if (which) return { ok: true, at: twice[which] };
  return { ok: false, says: 'The clocks showed this time twice. Choose which is meant.', twice };
}

/** "02:30 the first time, Tarnby time (UTC+2)". */
export function sayWhich(which: 'earlier' | 'later', at: string, zone: string, siteName: string): string {
  const turn = which === 'earlier' ? 'the first time' : 'the second time';
  return `${formatClock(at, zone)} ${turn}, ${formatZoneInWords(at, zone, siteName)}`;
}

/** An instant as the field for day and time takes it: "2026-11-29T14:00" on the clock of the zone. */
export function momentAt(instant: Date, zone: string): TypedMoment {
  const { year, month, day, hour, minute } = wallClock(instant, zone);
  const two = (part: number) => String(part).padStart(2, '0');
  return {
    text: `${String(year).padStart(4, '0')}-${two(month)}-${two(day)}T${two(hour)}:${two(minute)}`,
    which: null,
  };
}

/** A unit or a soft sensor: "unit 3", "sensor 9". */
export type SubjectChoice = `unit ${number}` | `sensor ${number}`;

export interface EventForm {
  subject: SubjectChoice | null;
  kind: EventKind | null;
  at: TypedMoment;
  until: TypedMoment;
  note: string;
}

/** A blank form: now, and what is likely: a start of what is stopped. */
export function blankEvent(
  subject: SubjectChoice | null,
  stopped: boolean,
  now: Date,
  zone: string,
): EventForm {
  return {
    subject,
    kind: stopped ? 'start' : null,
    at: momentAt(now, zone),
    until: { text: '', which: null },
    note: '',
  };
}

/** What is sent, or a sentence for each field that can’t be used. */
export function readEventForm(form: EventForm, zone: string) {
  const errors: Record<string, string> = {};
  if (form.subject === null) errors.subject = 'Choose the unit or the soft sensor.';
  if (form.kind === null) errors.kind = 'Choose what happened.';
  const at = readMoment(form.at, zone);
  if (!at.ok) errors.at = at.says;
  const lasted = form.kind !== null && stops(form.kind) && form.until.text !== '';
  const until = lasted ? readMoment(form.until, zone) : null;
  if (until && !until.ok) errors.until = until.says;
  if (form.subject === null || form.kind === null || !at.ok || (until && !until.ok)) return { errors };
  const [sort, id] = form.subject.split(' ');
  const of = sort === 'unit' ? { unitId: Number(id) } : { softSensorId: Number(id) };
  return { body: { ...of, kind: form.kind, at: at.at, until: until?.at ?? null, note: form.note } };
}

/** The server’s fields as this form names them. */
export function ownFields(fields: Record<string, string>): Record<string, string> {
  const { unitId, softSensorId, ...rest } = fields;
  const subject = unitId ?? softSensorId;
  return subject === undefined ? rest : { ...rest, subject };
}

/** What follows from an event of a kind, told before it is recorded. */
export function sayConsequence(kind: EventKind | null): string | undefined {
  if (kind === null) return undefined;
  if (kind === 'stop') return 'Until its start nothing is sampled or judged, and no reminder is sent.';
  if (kind === 'turnaround')
    return 'Until its start nothing is sampled or judged; from then on errors count anew.';
  return 'From then on errors count anew: those before it no longer speak for or against the estimate.';
}

/** A date read under one order of day and month: "3 Feb 2026"; as it is written where it can’t be read so. */
export function sayDay(written: string, order: DayOrder, zone: string): string {
  const read = createTimeReader({ order, zone })(written);
  if (read.ok) return formatDate(read.at, zone);
  return read.code === 'no-time-of-day' ? formatDate(String(read.figures.on), zone) : written;
}
