/**
 * Whom the rules of reminding concern, worked out by brute force from their wording: day by day, person by person, with
 * nothing of the product's own code, so that a trial compares two independent answers.
 */
export type Kind = 'recalibration' | 'review' | 'ownership-gap';

export interface Person {
  id: number;
  email: string;
  homeZone: string;
  active: boolean;
  engineerAt: Set<number>;
  managerAt: Set<number>;
}

export interface Every {
  every: number;
  unit: 'months' | 'days';
  anchorOn: string | null;
}

export interface Duty {
  key: string;
  kind: Kind;
  dueOn: string;
  openedOn: string;
  assigneeId: number | null;
  /** Days after its date on which somebody attends to it. */
  attendAt: number;
}

export interface Sensor {
  id: number;
  siteId: number;
  unitId: number;
  zone: string;
  tagName: string;
  importanceClass: 'A' | 'C';
  intervals: { recalibration: Every; review: Every };
  inServiceOn: string;
  ownerId: number;
  deputyId: number | null;
  duties: Map<Kind, Duty>;
  opened: number;
}

/** Something to be told, from the tick at which it was decided until the one at which it no longer had to be. */
export interface Expected {
  key: string;
  stage: number;
  personId: number;
  tagName: string;
  unitId: number;
  decided: number;
  ended: number | null;
}

export interface Offer {
  key: string;
  sensor: Sensor;
  id: number;
  toId: number;
  answerAt: number;
}

export interface World {
  people: Map<number, Person>;
  sensors: Sensor[];
  /** When each unit stopped that stands, by what was recorded; a clock set back by an hour lies before it. */
  stopped: Map<number, number | null>;
  /** When each unit last started. */
  started: Map<number, number>;
  offers: Offer[];
  expected: Map<string, Expected>;
  /** Stages of which somebody was told. */
  known: Set<string>;
}

const dayMs = 86_400_000;
const asMs = (date: string) => Date.parse(`${date}T00:00:00Z`);
const asDate = (ms: number) => new Date(ms).toISOString().slice(0, 10);

const formats = new Map<string, Intl.DateTimeFormat>();
/** The date that a wall calendar shows in a zone. */
export function localDate(ms: number, zone: string): string {
  let format = formats.get(zone);
  if (!format)
    formats.set(zone, (format = new Intl.DateTimeFormat('en-CA', { timeZone: zone, dateStyle: 'short' })));
  return format.format(ms);
}

export const later = (date: string, days: number): string => asDate(asMs(date) + days * dayMs);
export const daysFrom = (from: string, to: string): number => (asMs(to) - asMs(from)) / dayMs;

/** The same day of the month so many months later, or the last one where that month is shorter. */
function monthsLater(date: string, months: number): string {
  const [year, month, day] = date.split('-').map(Number) as [number, number, number];
  for (let last = day; ; last--) {
    const found = new Date(Date.UTC(year, month - 1 + months, last));
    if (found.getUTCDate() === last) return asDate(found.getTime());
  }
}

const after = (date: string, { every, unit }: Every, times: number): string =>
  unit === 'days' ? later(date, every * times) : monthsLater(date, every * times);

/** When it falls due next, after it was done on a day, or never yet, since it came into service. */
export function dueAfter(interval: Every, on: string, attended: string | null, first: boolean): string {
  if (interval.anchorOn === null) return after(on, interval, 1);
  const dates: string[] = [];
  for (let k = 0; dates.length < 2; k++) {
    const date = after(interval.anchorOn, interval, k);
    if (date > on || (first && date === on)) dates.push(date);
  }
  return attended !== null && dates.includes(attended) ? dates[1]! : dates[0]!;
}

/** Stages told on some day up to today, by looking at each day since long before. */
export function stagesUpTo(duty: Duty, today: string): number[] {
  const isStage = (late: number) =>
    (duty.kind !== 'ownership-gap' && (late === -30 || late === -7)) || (late >= 0 && late % 7 === 0);
  const told: number[] = [];
  let skipped: number | null = null;
  const late = daysFrom(duty.dueOn, today);
  const atOpening = daysFrom(duty.dueOn, duty.openedOn);
  for (let day = -30; day <= late; day++) {
    if (!isStage(day)) continue;
    if (day >= atOpening) told.push(day);
    else skipped = day;
  }
  return skipped === null || told.includes(atOpening) ? told : [skipped, ...told];
}

const managersOf = (world: World, siteId: number): number[] =>
  [...world.people.values()].filter((one) => one.active && one.managerAt.has(siteId)).map(({ id }) => id);

export function engineerOf(world: World, siteId: number, id: number | null): number | null {
  const person = id === null ? undefined : world.people.get(id);
  return person?.active && person.engineerAt.has(siteId) ? person.id : null;
}

/** Whom a stage of a duty concerns as things stand. */
function concerned(world: World, sensor: Sensor, duty: Duty, stage: number): Set<number> {
  const managers = managersOf(world, sensor.siteId);
  if (duty.kind === 'ownership-gap') return new Set(managers);
  const valid = (id: number | null) => engineerOf(world, sensor.siteId, id);
  const owner = valid(sensor.ownerId);
  const deputy = valid(sensor.deputyId);
  const first = valid(duty.assigneeId) ?? owner ?? deputy;
  const told = new Set(first === null ? managers : [first]);
  if (stage >= 7) for (const id of [owner, deputy]) if (id !== null) told.add(id);
  if (stage >= 14) for (const id of managers) told.add(id);
  return told;
}

/** Does a unit stand by the clock, whatever was recorded for later? */
export function standsAt(world: World, unitId: number, nowMs: number): boolean {
  const stoppedMs = world.stopped.get(unitId)!;
  if (stoppedMs !== null) return stoppedMs <= nowMs;
  return (world.started.get(unitId) ?? 0) > nowMs;
}

/** One look at everything: what is to be told from now on, and what no longer has to be. */
export function look(world: World, nowMs: number, tick: number): void {
  const open = new Map<string, { stages: Map<number, Set<number>> }>();
  for (const sensor of world.sensors) {
    const today = localDate(nowMs, sensor.zone);
    for (const duty of sensor.duties.values()) {
      const reached = stagesUpTo(duty, today);
      const stages = new Map(reached.map((stage) => [stage, concerned(world, sensor, duty, stage)]));
      open.set(duty.key, { stages });
      if (!standsAt(world, sensor.unitId, nowMs))
        decide(world, sensor, duty.key, stages, reached.at(-1), tick);
    }
  }
  for (const { key, sensor, toId } of world.offers) {
    const stages = new Map([[0, new Set(world.people.get(toId)!.active ? [toId] : [])]]);
    open.set(key, { stages });
    decide(world, sensor, key, stages, 0, tick);
  }
  for (const one of world.expected.values()) {
    const still = open.get(one.key)?.stages.get(one.stage)?.has(one.personId) ?? false;
    if (!still) one.ended ??= tick;
  }
}

/** A stage that nobody was told of goes to all it concerns; the newest one also to whom it concerns only now. */
function decide(
  world: World,
  { tagName, unitId }: Sensor,
  key: string,
  stages: Map<number, Set<number>>,
  newest: number | undefined,
  tick: number,
): void {
  for (const [stage, people] of stages) {
    if (world.known.has(`${key} ${stage}`) && stage !== newest) continue;
    for (const personId of people) {
      const id = `${key} ${stage} ${personId}`;
      const before = world.expected.get(id);
      world.known.add(`${key} ${stage}`);
      if (before) before.ended = null;
      else world.expected.set(id, { key, stage, personId, tagName, unitId, decided: tick, ended: null });
    }
  }
}
