import type { Ask, Asked } from '../../../shared/contracts/sampling.ts';
import { nextNumber, numberStem } from '../../../shared/rules/sample-label.ts';
import { type AskedSample, asksOf } from '../../../shared/rules/sampling-asks.ts';
import { shiftAt, type ShiftSpan } from '../../../shared/rules/shift-times.ts';
import type { Queryable } from '../../db/client.ts';
import type { SiteRow } from '../../http/rows.ts';
import {
  lastTaken,
  listRequests,
  notTakenBetween,
  numbersWith,
  sampledSensors,
  takenBetween,
} from './repo.ts';

const besides = { previous: -1, current: 0, next: 1 };

/** What is asked for in a shift of a site, and what stands of it. */
export async function askedFor(
  db: Queryable,
  site: SiteRow,
  which: keyof typeof besides,
  now: Date,
): Promise<Asked> {
  const shift = shiftAt(site.shifts, site.zone, now.getTime(), besides[which]);
  const found = await findShift(db, site.id, shift, now);
  const asks = asksOf(shift, found.sensors, found.requests, found.taken, found.notTaken);
  const sensorOf = ({ sensors }: AskedSample) => found.sensors.find(({ id }) => id === sensors[0]!.id)!;
  const stemOf = (ask: AskedSample) => numberStem(sensorOf(ask).samplePoint, ask.askedFor, site.zone);
  const pointIds = asks.map(({ samplePointId }) => samplePointId);
  const last = await lastTaken(db, site.id, [...new Set(pointIds)], now);
  const known = await numbersWith(db, site.id, pointIds, asks.map(stemOf));
  const show = (ask: AskedSample, index: number): Ask => {
    const { samplePoint, unitName, unit, method } = sensorOf(ask);
    const alike = asks.slice(0, index).filter((other) => keyOf(other) === keyOf(ask)).length;
    const before = last.get(ask.samplePointId);
    return {
      key: `${keyOf(ask)} ${alike + 1}`,
      samplePointId: ask.samplePointId,
      samplePoint,
      unitName,
      softSensors: ask.sensors.map(({ id, tagName, quantity }) => ({ id, tagName, quantity })),
      unit,
      methodId: ask.methodId,
      method,
      askedFor: new Date(ask.askedFor).toISOString(),
      source: sourceOf(ask),
      state: stateOf(ask, found),
      suggestedNumber: ask.answer ? '' : nextNumber(stemOf(ask), known),
      last: before
        ? { asWritten: before.asWritten, unit: before.unit, takenAt: before.takenAt.toISOString() }
        : null,
    };
  };
  return {
    shift: {
      name: shift.name,
      fromAt: new Date(shift.from).toISOString(),
      untilAt: new Date(shift.until).toISOString(),
    },
    asks: asks.map(show),
  };
}

/** Who needs samples, who asks for more, and what came of it in a shift. */
async function findShift(db: Queryable, siteId: number, shift: ShiftSpan, now: Date) {
  const [from, until] = [new Date(shift.from), new Date(shift.until)];
  // A shift that is over or still to come is seen from its end or its beginning.
  const seenAt = new Date(Math.min(Math.max(now.getTime(), shift.from), shift.until - 1));
  const sensors = await sampledSensors(db, siteId, seenAt);
  const pointIds = [...new Set(sensors.map(({ samplePointId }) => samplePointId))];
  const requests = (await listRequests(db, siteId, from))
    .filter(({ fromAt }) => fromAt < until)
    .map(({ takenBefore, count, fromAt, untilAt, ...request }) => ({
      ...request,
      missing: count - takenBefore,
      from: fromAt.getTime(),
      until: untilAt.getTime(),
    }));
  return {
    sensors,
    requests,
    taken: await takenBetween(db, siteId, pointIds, from, until),
    notTaken: await notTakenBetween(db, siteId, from, until),
  };
}
type Found = Awaited<ReturnType<typeof findShift>>;

const keyOf = ({ samplePointId, methodId, askedFor }: AskedSample): string =>
  `${samplePointId} ${methodId ?? 0} ${new Date(askedFor).toISOString()}`;

function sourceOf({ request }: AskedSample): Ask['source'] {
  if (!request) return { kind: 'plan' };
  const { id, askedBy, reason } = request;
  return { kind: 'request', requestId: id, askedBy, reason };
}

function stateOf({ answer }: AskedSample, { taken, notTaken }: Found): Ask['state'] {
  if (answer === null) return { kind: 'open' };
  if ('stoppedSince' in answer)
    return { kind: 'unit-stopped', since: new Date(answer.stoppedSince).toISOString() };
  if ('taken' in answer) {
    const { id, sampleNumber, takenAt, asWritten, unit } = taken.find((one) => one.id === answer.taken)!;
    const at = new Date(takenAt).toISOString();
    return { kind: 'taken', sampleId: id, sampleNumber, takenAt: at, asWritten, unit };
  }
  const { reason, note, by, at } = notTaken.find((one) => one.id === answer.notTaken)!;
  return { kind: 'not-taken', reason, note, by, at: at.toISOString() };
}
