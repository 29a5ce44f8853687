import type { Calibration } from '../../../shared/contracts/calibrations.ts';
import type { Draft, Revision } from '../../../shared/contracts/models.ts';
import type { Sheet, SheetFields, Status } from '../../../shared/contracts/register.ts';
import type { Queryable } from '../../db/client.ts';
import { toWire } from '../../http/wire.ts';
import { listCalibrations } from '../calibrations/repo.ts';
import { dueDatesOf } from '../duties/service.ts';
import { type SensorRow, tagNames } from '../estimates/repo.ts';
import { stoppagesOf, stoppedSince } from '../events/standing.ts';
import { findStatus } from '../judging/repo.ts';
import { currentOwnership, draftWithEditor, listRevisions, surroundings, workWaits } from './repo.ts';

/** The whole data sheet of a soft sensor as it stands. */
export async function readSheet(db: Queryable, sensor: SensorRow, now: Date): Promise<Sheet> {
  const key = [sensor.siteId, sensor.id] as const;
  const around = await surroundings(db, sensor);
  const ownership = await currentOwnership(db, ...key);
  const revisions = (await listRevisions(db, ...key)).map(toRevision);
  const draft = await draftOf(db, ...key);
  const stopped = stoppedSince(await stoppagesOf(db, sensor), now);
  const inForce = revisions.filter((revision) => revision.effectiveFrom !== null)[0] ?? null;
  return {
    ...toWire(around),
    id: sensor.id,
    siteId: sensor.siteId,
    estimateTagId: sensor.estimateTagId,
    fields: { ...fieldsOf(sensor), ...peopleOf(ownership) },
    revisionInForce: inForce,
    waiting: revisions.find((revision) => revision.decision === null) ?? null,
    draft,
    ...(await calibrationsOf(db, sensor)),
    dueOn: await dueDatesOf(db, ...key),
    stoppedSince: stopped?.toISOString() ?? null,
    inputs: await inputsOf(db, sensor, [inForce?.model, draft?.model]),
    status: await statusOf(db, sensor),
    working: await workWaits(db, ...key),
    version: sensor.version,
  };
}

/** What was decided of its recalibrations, and the correction that is in force for that. */
async function calibrationsOf(
  db: Queryable,
  sensor: SensorRow,
): Promise<Pick<Sheet, 'correction' | 'waitingCalibration' | 'calibrationToEnter' | 'lastCalibration'>> {
  const all = await listCalibrations(db, sensor.siteId, sensor.id);
  const standing = all.filter(
    ({ effectiveFrom, effectiveTo }) => effectiveFrom !== null && effectiveTo === null,
  );
  const changing = standing.find(({ slope, offset }) => slope !== 1 || offset !== 0);
  // Left as found keeps the correction that stood before it, which somebody else put there.
  const source = changing && all.find((one) => putInForce(one, changing));
  return {
    correction: changing
      ? {
          slope: changing.slope,
          offset: changing.offset,
          calibrationId: (source ?? changing).id,
          since: (source ?? changing).effectiveFrom!,
          approvedBy: (source ?? changing).decidedBy!.name,
          entered: (source ?? changing).toBeEntered,
        }
      : null,
    waitingCalibration: all.find(({ decision }) => decision === null) ?? null,
    calibrationToEnter:
      all.find((one) => one.decision === 'approved' && one.toBeEntered && one.enteredAt === null) ?? null,
    lastCalibration: all.find(({ decision }) => decision === 'approved' || decision === 'confirmed') ?? null,
  };
}

/** The newest calibration that brought in the same correction rather than leaving it. */
const putInForce = (one: Calibration, standing: Calibration): boolean =>
  one.kind !== 'as-found' &&
  one.effectiveFrom !== null &&
  one.number <= standing.number &&
  one.slope === standing.slope &&
  one.offset === standing.offset;

type ListedRevision = Awaited<ReturnType<typeof listRevisions>>[number];

export function toRevision({ revision, proposedBy, decidedBy }: ListedRevision): Revision {
  const { editedBy: _editedBy, siteId: _siteId, ...row } = revision;
  return { ...toWire(row), model: revision.model, fit: revision.fit, proposedBy, decidedBy };
}

export async function draftOf(db: Queryable, siteId: number, softSensorId: number): Promise<Draft | null> {
  const found = await draftWithEditor(db, siteId, softSensorId);
  if (!found) return null;
  const { siteId: _siteId, updatedAt, ...row } = found.draft;
  return { ...row, updatedAt: updatedAt.toISOString(), updatedBy: found.editor };
}

/** The fields that a person types, as they stand. */
export function fieldsOf(sensor: SensorRow): Omit<SheetFields, 'ownerId' | 'deputyId' | 'approverId'> {
  const {
    id: _id,
    siteId: _siteId,
    estimateTagId: _estimateTagId,
    externalCorrectedSince: _externalCorrectedSince,
    version: _version,
    createdAt: _createdAt,
    createdBy: _createdBy,
    ...fields
  } = sensor;
  return fields;
}

export const peopleOf = (ownership: Awaited<ReturnType<typeof currentOwnership>>) => ({
  ownerId: ownership?.ownerId ?? null,
  deputyId: ownership?.deputyId ?? null,
  approverId: ownership?.approverId ?? null,
});

async function inputsOf(db: Queryable, sensor: SensorRow, models: (Revision['model'] | undefined)[]) {
  const ids = models.flatMap((model) =>
    model?.form === 'regression' ? model.terms.map((term) => term.tagId) : [],
  );
  const names = await tagNames(db, sensor.siteId, [...new Set(ids)]);
  return [...names.values()].map(({ id, ...tag }) => ({ tagId: id, ...tag }));
}

async function statusOf(db: Queryable, sensor: SensorRow): Promise<Status | null> {
  const found = await findStatus(db, sensor.siteId, sensor.id);
  if (!found) return null;
  const { siteId: _siteId, softSensorId: _softSensorId, severity: _severity, ...row } = found;
  return toWire(row);
}
