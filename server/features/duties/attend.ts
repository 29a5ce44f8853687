import { and, eq, sql } from 'drizzle-orm';
import type { Duty } from '../../../shared/contracts/duties.ts';
import { AppError } from '../../../shared/contracts/errors.ts';
import { addDays, dateAt, nextDueOn } from '../../../shared/rules/due-dates.ts';
import { dutyWords } from '../../../shared/rules/duty-sentences.ts';
import { dutyRights, waiverRefusal } from '../../../shared/rules/duty-rights.ts';
import { formatDate } from '../../../shared/rules/format.ts';
import type { Context } from '../../context.ts';
import type { Tx } from '../../db/client.ts';
import { duties } from '../../db/schema/index.ts';
import { invalidInput } from '../../http/parse.ts';
import { type Permitted, type RowOf, lockRow } from '../../http/rows.ts';
import { stale } from '../../http/stale.ts';
import { type SensorRow, findSensor } from '../estimates/repo.ts';
import { listPeopleAtSite } from '../people/repo.ts';
import { note } from '../register/note.ts';
import { currentOwnership } from '../register/repo.ts';
import type { By } from '../register/service.ts';
import { getSite } from '../sites/repo.ts';
import { readDuties } from './list.ts';

type DutyRow = RowOf<'duty'>;

const waiverRefusals = {
  'own-duty': 'This duty is yours, so somebody else waives it: the named approver or a manager of the site.',
  'not-approver': 'Only the named approver or a manager of the site waives a duty.',
};
const longestGapWaiver = 90;

/** Closes a duty as waived and opens the one that takes its place on the new date. */
export async function waiveDuty(
  context: Context,
  by: By,
  row: Permitted<DutyRow>,
  body: { reason: string; dueOn: string; version: number },
): Promise<Duty> {
  return context.db.transaction(async (tx) => {
    const { duty, sensor, rights } = await openDuty(tx, row, body.version);
    const refusal = waiverRefusal(by.actor, rights);
    if (refusal) throw new AppError('forbidden', waiverRefusals[refusal]);
    const { zone } = (await getSite(tx, duty.siteId))!;
    const now = context.clock();
    const today = dateAt(now, zone);
    refuseWrongDate(body.dueOn, today, zone, latestDate(duty, sensor, today));
    await tx
      .update(duties)
      .set({
        state: 'waived',
        closedAt: now,
        closedBy: by.actor.id,
        reason: body.reason,
        version: duty.version + 1,
      })
      .where(and(eq(duties.siteId, duty.siteId), eq(duties.id, duty.id)));
    const { siteId, softSensorId, kind, assigneeId } = duty;
    const [next] = await tx
      .insert(duties)
      .values({
        siteId,
        softSensorId,
        kind,
        assigneeId,
        dueOn: body.dueOn,
        openedAt: now,
        openedOn: today,
      })
      .returning({ id: duties.id });
    const before = { state: 'open', dueOn: duty.dueOn };
    const after = { state: 'waived', dueOn: body.dueOn };
    await note(context, tx, by, sensor, 'decide', dutyWords[kind], before, after, body.reason);
    return (await readDuties(tx, by.actor, now, [next!.id]))[0]!;
  });
}

/** A waiver puts a duty off by one interval at most. */
function latestDate(duty: DutyRow, sensor: SensorRow, today: string): string {
  if (duty.kind === 'ownership-gap') return addDays(today, longestGapWaiver);
  const interval = duty.kind === 'recalibration' ? sensor.recalibrationInterval : sensor.reviewInterval;
  return nextDueOn({ ...interval, counted: 'last-done' }, { on: today, first: false, dueOn: null });
}

function refuseWrongDate(dueOn: string, today: string, zone: string, latest: string): void {
  const say = (message: string) => invalidInput([{ path: 'dueOn', message }]);
  if (dueOn <= today) throw say('Choose a day after today.');
  if (dueOn > latest) {
    throw say(
      `Choose a day up to ${formatDate(latest, zone)}. What can wait longer than that needs another interval on its data sheet.`,
    );
  }
}

/** Gives a duty to an engineer of the site, or back to the owner. */
export async function reassignDuty(
  context: Context,
  by: By,
  row: Permitted<DutyRow>,
  body: { personId: number | null; reason: string; version: number },
): Promise<Duty> {
  return context.db.transaction(async (tx) => {
    const { duty, sensor, rights } = await openDuty(tx, row, body.version);
    if (duty.kind === 'ownership-gap') {
      throw new AppError(
        'conflict',
        'An ownership gap stays with the managers of the site until it is filled.',
      );
    }
    if (!dutyRights(by.actor, rights).mayReassign) {
      throw new AppError(
        'forbidden',
        'Only the owner, the deputy or a manager of the site gives a duty away.',
      );
    }
    if (body.personId !== null) await refuseNoEngineer(tx, duty.siteId, body.personId);
    const assigneeId = body.personId === rights.ownerId ? null : body.personId;
    await tx
      .update(duties)
      .set({ assigneeId, version: sql`${duties.version} + 1` })
      .where(and(eq(duties.siteId, duty.siteId), eq(duties.id, duty.id)));
    const before = { assigneeId: duty.assigneeId };
    await note(context, tx, by, sensor, 'change', dutyWords[duty.kind], before, { assigneeId }, body.reason);
    return (await readDuties(tx, by.actor, context.clock(), [duty.id]))[0]!;
  });
}

async function refuseNoEngineer(tx: Tx, siteId: number, personId: number): Promise<void> {
  const person = (await listPeopleAtSite(tx, siteId)).find(({ id }) => id === personId);
  if (person?.roles.includes('engineer')) return;
  throw invalidInput([
    { path: 'personId', message: 'This person is no engineer of the site. Choose somebody who is.' },
  ]);
}

/** The duty, locked as it stands now, with its soft sensor and what decides on rights. */
async function openDuty(tx: Tx, row: Permitted<DutyRow>, version: number) {
  const duty = await lockRow(tx, 'duty', row);
  if (duty.state !== 'open') {
    throw new AppError(
      'conflict',
      `This duty was ${duty.state === 'done' ? 'attended to' : 'waived'} meanwhile.`,
    );
  }
  if (duty.version !== version) {
    const { dueOn, assigneeId } = duty;
    throw stale('duty', { dueOn, assigneeId, version: duty.version });
  }
  const sensor = (await findSensor(tx, duty.siteId, duty.softSensorId))!;
  const ownership = await currentOwnership(tx, duty.siteId, duty.softSensorId);
  const rights = {
    kind: duty.kind,
    siteId: duty.siteId,
    open: true,
    ownerId: ownership?.ownerId ?? null,
    deputyId: ownership?.deputyId ?? null,
    approverId: ownership?.approverId ?? null,
    assigneeId: duty.assigneeId,
  };
  return { duty, sensor, rights };
}
