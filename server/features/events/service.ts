import { sql } from 'drizzle-orm';
import type { z } from 'zod';
import { AppError } from '../../../shared/contracts/errors.ts';
import type { events as contract, PlantEvent } from '../../../shared/contracts/events.ts';
import type { StandingEvent } from '../../../shared/rules/event-order.ts';
import { settleEvents } from '../../../shared/rules/event-order.ts';
import { subjectKey } from '../../../shared/rules/event-outcomes.ts';
import type { EventSubject } from '../../../shared/rules/event-row.ts';
import { sayEventProblem, sayOccurrence } from '../../../shared/rules/event-sentences.ts';
import type { Context } from '../../context.ts';
import type { Tx } from '../../db/client.ts';
import { invalidInput } from '../../http/parse.ts';
import { type Permitted, type SiteRow, lockRow } from '../../http/rows.ts';
import { toWire } from '../../http/wire.ts';
import { recordAudit } from '../audit/service.ts';
import { findSensor } from '../estimates/repo.ts';
import { markSensorDirty } from '../estimates/work.ts';
import type { By } from '../register/service.ts';
import { getSite, getUnit } from '../sites/repo.ts';
import {
  type EventRecord,
  getEvents,
  insertEvents,
  listSensors,
  setWithdrawn,
  standingEvents,
} from './repo.ts';

type NewEvent = z.output<(typeof contract)['events.add']['body']>;

/** Records an event, and with `until` the start that ended a stop; what depends on it is judged again from then on. */
export async function addEvent(
  context: Context,
  by: By,
  site: SiteRow,
  body: NewEvent,
): Promise<{ rows: PlantEvent[] }> {
  return context.db.transaction(async (tx) => {
    const subject = await subjectOf(tx, site.id, body);
    await oneAtATime(tx, site.id);
    const now = context.clock();
    const at = Date.parse(body.at);
    const until = body.until === null ? null : Date.parse(body.until);
    const occurrence = { line: 0, kind: body.kind, at, until };
    const standing = (await standingEvents(tx, site.id)).get(subjectKey(subject)) ?? [];
    const { fresh, problem } = settleEvents([occurrence], standing, now.getTime()).get(occurrence)!;
    if (problem) {
      const message = sayEventProblem(problem, subject.name, site.zone);
      throw invalidInput([{ path: problem.field, message }]);
    }
    if (fresh.length === 0) {
      const what = sayOccurrence(occurrence, subject.name, site.zone);
      throw new AppError('conflict', `${what} is recorded already.`);
    }
    const made = await recordEvents(tx, by, site.id, now, [{ subject, fresh, note: body.note }]);
    for (const row of made) await note(context, tx, by, row, subject.name, site.zone, 'add');
    return {
      rows: toWire(
        await getEvents(
          tx,
          site.id,
          made.map(({ id }) => id),
        ),
      ),
    };
  });
}

/** Two who record at once for a site do so one after the other, each knowing what the other did. */
export async function oneAtATime(tx: Tx, siteId: number): Promise<void> {
  await tx.execute(sql`select pg_advisory_xact_lock(hashtext('cupel-events'), ${siteId}::int)`);
}

async function subjectOf(tx: Tx, siteId: number, body: NewEvent): Promise<EventSubject> {
  const { unitId, softSensorId } = body;
  if ((unitId === null) === (softSensorId === null)) {
    throw invalidInput([{ path: 'unitId', message: 'Choose one unit or one soft sensor.' }]);
  }
  if (softSensorId !== null) {
    const sensor = await findSensor(tx, siteId, softSensorId);
    const message = 'This soft sensor is not one of the site. Choose another.';
    if (!sensor) throw invalidInput([{ path: 'softSensorId', message }]);
    return { unitId, softSensorId, name: sensor.tagName };
  }
  const unit = await getUnit(tx, siteId, unitId!);
  if (!unit || unit.archivedAt !== null) {
    throw invalidInput([
      { path: 'unitId', message: 'This unit is not one in use at the site. Choose another.' },
    ]);
  }
  return { unitId, softSensorId, name: unit.name };
}

export interface FreshEvents {
  subject: EventSubject;
  fresh: readonly StandingEvent[];
  note: string;
}

/** Writes events, and marks every soft sensor that they bear on from the earliest of them on. */
export async function recordEvents(
  tx: Tx,
  by: By,
  siteId: number,
  now: Date,
  added: readonly FreshEvents[],
): Promise<EventRecord[]> {
  const rows = added.flatMap(({ subject: { unitId, softSensorId }, fresh, note }) =>
    fresh.map(({ kind, at }, index) => ({
      siteId,
      unitId,
      softSensorId,
      kind,
      at: new Date(at),
      // A note is about what happened, which the first of the two events tells.
      note: index === 0 ? note : '',
      recordedBy: by.actor.id,
      recordedAt: now,
    })),
  );
  const made = await insertEvents(tx, rows);
  await markConcerned(tx, siteId, made);
  return made;
}

/** The soft sensor of an event, or all of its unit, are paired and judged again from its time on. */
async function markConcerned(tx: Tx, siteId: number, rows: readonly EventRecord[]): Promise<void> {
  const sensors = await listSensors(tx, siteId);
  const from = new Map<number, Date>();
  for (const row of rows) {
    for (const { id, unitId } of sensors) {
      if (row.softSensorId !== id && row.unitId !== unitId) continue;
      const before = from.get(id);
      if (!before || row.at < before) from.set(id, row.at);
    }
  }
  for (const [id, at] of from) await markSensorDirty(tx, siteId, id, at);
}

/** Withdraws an event that was recorded wrongly; it stays on record. */
export async function withdrawEvent(
  context: Context,
  by: By,
  row: Permitted<EventRecord>,
  reason: string,
): Promise<PlantEvent> {
  return context.db.transaction(async (tx) => {
    const event = await lockRow(tx, 'event', row);
    const [before] = await getEvents(tx, row.siteId, [row.id]);
    if (event.withdrawnAt) {
      throw new AppError('conflict', `${before!.withdrawnBy} has withdrawn this event already.`);
    }
    await setWithdrawn(tx, row, { personId: by.actor.id, at: context.clock(), reason });
    await markConcerned(tx, row.siteId, [event]);
    const { zone } = await getSite(tx, row.siteId);
    await note(context, tx, by, event, before!.tagName ?? before!.unitName, zone, 'undo', reason);
    return toWire((await getEvents(tx, row.siteId, [row.id]))[0]!);
  });
}

async function note(
  context: Context,
  tx: Tx,
  by: By,
  { id, siteId, kind, at, note: words }: EventRecord,
  name: string,
  zone: string,
  action: 'add' | 'undo',
  reason = '',
): Promise<void> {
  const entityName = sayOccurrence({ kind, at: at.getTime(), until: null }, name, zone);
  const told = { kind, at: at.toISOString(), note: words };
  const sides = action === 'add' ? { after: told } : { before: told };
  const about = { at: context.clock(), siteId, ...by, entity: 'event', entityId: id, entityName };
  await recordAudit(tx, { ...about, action, reason, ...sides });
}
