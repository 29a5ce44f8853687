import type { SamplingPlan } from '../contracts/sampling.ts';
import type { ShiftSpan } from './shift-times.ts';

/** A soft sensor that has its references taken. Instants are UTC milliseconds. */
export interface SampledSensor {
  id: number;
  tagName: string;
  quantity: string;
  unit: string;
  samplePointId: number;
  methodId: number | null;
  plan: SamplingPlan | null;
  stoppedSince: number | null;
}

export interface OpenRequest {
  id: number;
  softSensorId: number;
  askedBy: string;
  reason: string;
  /** Samples that are still missing when the shift begins. */
  missing: number;
  from: number;
  until: number;
}

export interface TakenSample {
  id: number;
  samplePointId: number;
  methodId: number | null;
  takenAt: number;
}

export interface NotTakenRecord {
  id: number;
  samplePointId: number;
  askedFor: number;
}

/** One sample asked for, and what answers it. */
export interface AskedSample {
  samplePointId: number;
  methodId: number | null;
  sensors: SampledSensor[];
  askedFor: number;
  request: OpenRequest | null;
  answer: { taken: number } | { notTaken: number } | { stoppedSince: number } | null;
}

const roundMs = 300_000;

/**
 * How many samples a plan asks for in a shift: those of a day or week are spread evenly over its shifts, the first in
 * the first shift (of Monday).
 */
export function countInShift(plan: SamplingPlan | null, { ofDay, dayOfWeek }: ShiftSpan): number {
  if (!plan) return 0;
  if (plan.per === 'shift') return plan.count;
  const week = plan.per === 'week';
  const shifts = ofDay.count * (week ? 7 : 1);
  const index = ofDay.index + (week ? (dayOfWeek - 1) * ofDay.count : 0);
  const upTo = (shift: number) => Math.ceil((shift * plan.count) / shifts);
  return upTo(index + 1) - upTo(index);
}

/** Of the samples still missing of a request, those that this shift should bring: an even share of the time left. */
function shareOf({ missing, until }: OpenRequest, { from, until: end }: ShiftSpan): number {
  const shiftsLeft = Math.max(1, Math.ceil((until - from) / (end - from)));
  return Math.ceil(Math.max(0, missing) / shiftsLeft);
}

const sameMethod = (a: number | null, b: number | null) => a === null || b === null || a === b;

/**
 * The samples asked for in a shift. Soft sensors at one point with one method share them: the largest count counts. Those
 * of the plan are spread evenly over the shift; further ones that people ask for come between them while their request
 * lasts. A sample taken at the point in the shift answers the nearest that is open, a record of not taking answers the
 * one whose time it names. Of those that nothing answers at a point that is stopped, one is left to say so.
 * @param sensors those whose references count: in service or in validation, with a sample point
 * @param requests open ones, their span touching the shift
 * @returns in order of time
 */
export function asksOf(
  shift: ShiftSpan,
  sensors: readonly SampledSensor[],
  requests: readonly OpenRequest[],
  taken: readonly TakenSample[],
  notTaken: readonly NotTakenRecord[],
): AskedSample[] {
  const groups = new Map<string, SampledSensor[]>();
  for (const sensor of sensors) {
    const key = `${sensor.samplePointId} ${sensor.methodId ?? 0}`;
    groups.set(key, [...(groups.get(key) ?? []), sensor]);
  }
  return [...groups.values()]
    .flatMap((group) => {
      const asks = askedOf(shift, group, requests);
      if (asks.length > 0) answer(shift, asks, taken, notTaken);
      return withStop(group, asks);
    })
    .sort((a, b) => a.askedFor - b.askedFor || a.samplePointId - b.samplePointId);
}

/** What is asked of one group, unanswered; of those that run, where some are stopped. */
function askedOf(
  shift: ShiftSpan,
  group: readonly SampledSensor[],
  requests: readonly OpenRequest[],
): AskedSample[] {
  const running = group.filter(({ stoppedSince }) => stoppedSince === null);
  const sensors = running.length > 0 ? running : [...group];
  const planned = Math.max(...sensors.map(({ plan }) => countInShift(plan, shift)));
  const wanted = requests
    .filter(({ softSensorId }) => sensors.some(({ id }) => id === softSensorId))
    .map((request) => ({ request, count: shareOf(request, shift) }))
    .sort((a, b) => b.count - a.count);
  const most = wanted[0];
  const further = most ? timesBetween(spread(shift, planned), most.count, overlap(most.request, shift)) : [];
  const { samplePointId, methodId } = sensors[0]!;
  return [...spread(shift, planned), ...further].map((askedFor, index) => ({
    samplePointId,
    methodId,
    sensors,
    askedFor: Math.round(askedFor / roundMs) * roundMs,
    request: wanted.find(({ count }) => index < count)?.request ?? null,
    answer: null,
  }));
}

interface Span {
  from: number;
  until: number;
}

const overlap = (one: Span, other: Span): Span => ({
  from: Math.max(one.from, other.from),
  until: Math.min(one.until, other.until),
});

/** Times that part a span evenly, half a step from its ends. */
const spread = ({ from, until }: Span, count: number): number[] =>
  Array.from({ length: count }, (_, index) => from + ((index + 0.5) * (until - from)) / count);

/** Times in a span that are added to those there, so that they are `count` in all: each in the middle of the widest gap. */
function timesBetween(there: readonly number[], count: number, span: Span): number[] {
  if (there.length === 0) return spread(span, count);
  const times = there.filter((at) => at > span.from && at < span.until);
  const added: number[] = [];
  while (there.length + added.length < count) {
    const edges = [span.from, ...times, span.until].sort((a, b) => a - b);
    const widths = edges.slice(1).map((edge, index) => edge - edges[index]!);
    const widest = widths.indexOf(Math.max(...widths));
    const at = edges[widest]! + widths[widest]! / 2;
    times.push(at);
    added.push(at);
  }
  return added;
}

function answer(
  shift: ShiftSpan,
  asks: readonly AskedSample[],
  taken: readonly TakenSample[],
  notTaken: readonly NotTakenRecord[],
): void {
  const { samplePointId, methodId } = asks[0]!;
  for (const record of notTaken.filter((one) => one.samplePointId === samplePointId)) {
    const own = asks.find(({ askedFor, answer }) => answer === null && askedFor === record.askedFor);
    if (own) own.answer = { notTaken: record.id };
  }
  const here = taken.filter(
    (one) =>
      one.samplePointId === samplePointId &&
      sameMethod(one.methodId, methodId) &&
      one.takenAt >= shift.from &&
      one.takenAt < shift.until,
  );
  for (const { id, takenAt } of here) {
    const open = asks.filter((ask) => ask.answer === null);
    const distance = (ask: AskedSample) => Math.abs(ask.askedFor - takenAt);
    const nearest = open.sort((a, b) => distance(a) - distance(b))[0];
    if (nearest) nearest.answer = { taken: id };
  }
}

/** Where all of a group are stopped, the first of the open ones says since when, and the others fall away. */
function withStop(group: readonly SampledSensor[], asks: AskedSample[]): AskedSample[] {
  const stops = group.flatMap(({ stoppedSince }) => stoppedSince ?? []);
  if (stops.length < group.length) return asks;
  const stoppedSince = Math.max(...stops);
  const first = asks.filter((ask) => ask.answer === null).sort((a, b) => a.askedFor - b.askedFor)[0];
  if (first) first.answer = { stoppedSince };
  return asks.filter((ask) => ask.answer !== null);
}
