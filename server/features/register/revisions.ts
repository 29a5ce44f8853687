import { isDeepStrictEqual } from 'node:util';
import { eq } from 'drizzle-orm';
import { AppError } from '../../../shared/contracts/errors.ts';
import type { Draft, Model, Revision } from '../../../shared/contracts/models.ts';
import type { Run } from '../../../shared/contracts/runs.ts';
import { type DecisionRefusal, mayDecide } from '../../../shared/rules/permissions.ts';
import type { Context } from '../../context.ts';
import type { Tx } from '../../db/client.ts';
import { drafts, lifeStates, revisions } from '../../db/schema/index.ts';
import { invalidInput } from '../../http/parse.ts';
import { type Permitted, lockRow } from '../../http/rows.ts';
import { stale } from '../../http/stale.ts';
import { toWire } from '../../http/wire.ts';
import { addJob } from '../../jobs/queue.ts';
import {
  type RevisionRow,
  type SensorRow,
  approvedRevisions,
  findDraft,
  findSensor,
} from '../estimates/repo.ts';
import { markSensorDirty } from '../estimates/work.ts';
import { syncSensor } from '../duties/service.ts';
import { lifeNow } from '../judging/repo.ts';
import { addRun } from '../runs/repo.ts';
import { refuseWrongInputs } from './model-inputs.ts';
import { refuseUnowned } from '../ownership/required.ts';
import { note } from './note.ts';
import { currentOwnership, listRevisions } from './repo.ts';
import type { By } from './service.ts';
import { draftOf, toRevision } from './sheet.ts';

/** Saves the draft of a model; two engineers on the same draft get both sides. */
export async function saveDraft(
  context: Context,
  by: By,
  sensor: Permitted<SensorRow>,
  body: { model: Model; version: number | null },
): Promise<Draft> {
  return context.db.transaction(async (tx) => {
    await lockRow(tx, 'softSensor', sensor);
    await refuseWrongInputs(tx, sensor, body.model);
    const before = await findDraft(tx, sensor.siteId, sensor.id);
    if ((before?.version ?? null) !== body.version) {
      throw stale('draft', { ...(await draftOf(tx, sensor.siteId, sensor.id)) });
    }
    const values = {
      model: body.model,
      // A fit belongs to the coefficients it found; typed-in ones have none.
      fit: before?.fit && sameModel(before.model, body.model) ? before.fit : null,
      updatedAt: context.clock(),
      updatedBy: by.actor.id,
    };
    if (before) {
      await tx
        .update(drafts)
        .set({ ...values, version: before.version + 1 })
        .where(eq(drafts.id, before.id));
    } else await tx.insert(drafts).values({ ...values, siteId: sensor.siteId, softSensorId: sensor.id });
    await note(
      context,
      tx,
      by,
      sensor,
      before ? 'change' : 'add',
      'draft',
      before?.model ?? null,
      body.model,
    );
    return (await draftOf(tx, sensor.siteId, sensor.id))!;
  });
}

/** jsonb keeps no order of keys, so texts of the two can't be compared. */
const sameModel = (a: Model, b: Model): boolean => isDeepStrictEqual(a, b);

/** Queues a least-squares fit of the draft on the samples of a period. */
export async function startFit(
  context: Context,
  by: By,
  sensor: Permitted<SensorRow>,
  body: { from: string; to: string; version: number },
): Promise<Run> {
  return context.db.transaction(async (tx) => {
    const draft = await findDraft(tx, sensor.siteId, sensor.id);
    if (!draft || draft.version !== body.version)
      throw stale('draft', { ...(await draftOf(tx, sensor.siteId, sensor.id)) });
    if (draft.model.form !== 'regression')
      throw new AppError('conflict', 'Only a regression is fitted. Choose that form first.');
    if (Date.parse(body.from) >= Date.parse(body.to)) {
      throw invalidInput([{ path: 'to', message: 'The end must be after the beginning.' }]);
    }
    const key = { siteId: sensor.siteId, createdBy: by.actor.id, createdAt: context.clock() };
    const run = await addRun(tx, { ...key, kind: 'fit', subjectId: sensor.id });
    await addJob(
      tx,
      'fit',
      { siteId: sensor.siteId, softSensorId: sensor.id, runId: run.id, ...body },
      { maxAttempts: 3 },
    );
    await note(context, tx, by, sensor, 'start', 'fit', null, { from: body.from, to: body.to });
    return toWire({ ...run });
  });
}

/** Sends the draft for approval: it becomes a revision that nobody can change any more. */
export async function proposeRevision(
  context: Context,
  by: By,
  row: Permitted<SensorRow>,
  body: { version: number; reason: string; changeReference: string },
): Promise<Revision> {
  return context.db.transaction(async (tx) => {
    const sensor = await lockRow(tx, 'softSensor', row);
    const draft = await findDraft(tx, sensor.siteId, sensor.id);
    if (!draft || draft.version !== body.version)
      throw stale('draft', { ...(await draftOf(tx, sensor.siteId, sensor.id)) });
    await refuseUnowned(tx, sensor);
    const all = await listRevisions(tx, sensor.siteId, sensor.id);
    const waiting = all.find(({ revision }) => revision.decision === null);
    if (waiting) {
      throw new AppError(
        'conflict',
        `Revision ${waiting.revision.number} waits for approval already. Withdraw it first, or wait for the decision.`,
      );
    }
    const [made] = await tx
      .insert(revisions)
      .values({
        siteId: sensor.siteId,
        softSensorId: sensor.id,
        number: (all[0]?.revision.number ?? 0) + 1,
        model: draft.model,
        fit: draft.fit,
        reason: body.reason,
        changeReference: body.changeReference,
        proposedAt: context.clock(),
        proposedBy: by.actor.id,
        editedBy: [draft.updatedBy],
      })
      .returning();
    await note(context, tx, by, sensor, 'propose', 'revision', null, {
      number: made!.number,
      reason: body.reason,
    });
    return oneRevision(tx, made!);
  });
}

async function oneRevision(tx: Tx, revision: RevisionRow): Promise<Revision> {
  return toRevision((await listRevisions(tx, revision.siteId, revision.softSensorId, revision.id))[0]!);
}

const refusals: Record<DecisionRefusal, string> = {
  'own-proposal':
    'You proposed this revision, so somebody else decides: the named approver or a manager of the site.',
  'own-edit':
    'You worked on this revision, so somebody else decides: the named approver or a manager of the site.',
  'not-approver': 'Only the named approver or a manager of the site decides.',
};

/** Approves or declines a revision. Approved, it is in force from now on; the soft sensor is in service. */
export async function decideRevision(
  context: Context,
  by: By,
  row: Permitted<RevisionRow>,
  body: { decision: 'approved' | 'declined'; reason: string },
): Promise<Revision> {
  return context.db.transaction(async (tx) => {
    const revision = await lockRow(tx, 'revision', row);
    const sensor = (await findSensor(tx, revision.siteId, revision.softSensorId))!;
    const ownership = await currentOwnership(tx, revision.siteId, revision.softSensorId);
    const refusal = mayDecide(by.actor, { ...revision, approverId: ownership?.approverId ?? null });
    if (refusal) throw new AppError('forbidden', refusals[refusal]);
    if (revision.decision !== null)
      throw new AppError('conflict', `Revision ${revision.number} was ${revision.decision} already.`);
    const now = context.clock();
    const approved = body.decision === 'approved';
    const first = (await approvedRevisions(tx, revision.siteId, revision.softSensorId)).length === 0;
    await tx
      .update(revisions)
      .set({
        decision: body.decision,
        decidedAt: now,
        decidedBy: by.actor.id,
        decisionReason: body.reason,
        effectiveFrom: approved ? now : null,
      })
      .where(eq(revisions.id, revision.id));
    if (approved) await putIntoForce(tx, by, sensor, first, now);
    await note(
      context,
      tx,
      by,
      sensor,
      'decide',
      'revision',
      null,
      { number: revision.number, ...body },
      body.reason,
    );
    return oneRevision(tx, revision);
  });
}

async function putIntoForce(tx: Tx, by: By, sensor: SensorRow, first: boolean, now: Date): Promise<void> {
  const life = await lifeNow(tx, sensor.siteId, sensor.id);
  if (life?.state === 'draft' || life?.state === 'in-validation') {
    await tx.insert(lifeStates).values({
      siteId: sensor.siteId,
      softSensorId: sensor.id,
      state: 'in-service',
      effectiveFrom: now,
      recordedBy: by.actor.id,
    });
  }
  await syncSensor(tx, { siteId: sensor.siteId, softSensorId: sensor.id }, now);
  // Before a first revision there is no recorded estimate, so it is computed over all history there is.
  await markSensorDirty(tx, sensor.siteId, sensor.id, first ? new Date(0) : now);
}

export async function withdrawRevision(
  context: Context,
  by: By,
  row: Permitted<RevisionRow>,
): Promise<Revision> {
  return context.db.transaction(async (tx) => {
    const revision = await lockRow(tx, 'revision', row);
    if (revision.decision !== null)
      throw new AppError('conflict', `Revision ${revision.number} was ${revision.decision} already.`);
    const sensor = (await findSensor(tx, revision.siteId, revision.softSensorId))!;
    await tx
      .update(revisions)
      .set({ decision: 'withdrawn', decidedAt: context.clock(), decidedBy: by.actor.id })
      .where(eq(revisions.id, revision.id));
    await note(context, tx, by, sensor, 'change', 'revision', null, {
      number: revision.number,
      decision: 'withdrawn',
    });
    return oneRevision(tx, revision);
  });
}
