import { eq } from 'drizzle-orm';
import type { z } from 'zod';
import type { Calibration, calibrations as contract } from '../../../shared/contracts/calibrations.ts';
import { AppError } from '../../../shared/contracts/errors.ts';
import { type DecisionRefusal, mayDecide } from '../../../shared/rules/permissions.ts';
import { evidenceRefusalSentence } from '../../../shared/rules/recalibration-sentences.ts';
import type { Context } from '../../context.ts';
import type { Tx } from '../../db/client.ts';
import { calibrations } from '../../db/schema/index.ts';
import { invalidInput } from '../../http/parse.ts';
import { type Permitted, lockRow } from '../../http/rows.ts';
import { stale } from '../../http/stale.ts';
import { recalibrationDone } from '../duties/service.ts';
import { type SensorRow, approvedRevisions, findSensor } from '../estimates/repo.ts';
import { queueJudging } from '../judging/changed.ts';
import { note } from '../register/note.ts';
import { currentOwnership } from '../register/repo.ts';
import type { By } from '../register/service.ts';
import { evidenceNow } from './evidence.ts';
import { type CalibrationRow, findWaiting, getCalibration, nextNumber, revisedSamples } from './repo.ts';

type Body<K extends keyof typeof contract> = (typeof contract)[K] extends { body: z.ZodType }
  ? z.output<(typeof contract)[K]['body']>
  : never;

const refusals: Record<DecisionRefusal, string> = {
  'own-proposal':
    'You proposed this recalibration, so somebody else decides: the named approver or a manager of the site.',
  'own-edit':
    'You worked on this recalibration, so somebody else decides: the named approver or a manager of the site.',
  'not-approver': 'Only the named approver or a manager of the site decides.',
};

const longestAheadMs = 31 * 86_400_000;

/** Proposes what the evidence shows now; it is frozen with the proposal. */
export async function proposeCalibration(
  context: Context,
  by: By,
  row: Permitted<SensorRow>,
  body: Body<'calibrations.propose'>,
): Promise<Calibration> {
  return context.db.transaction(async (tx) => {
    const sensor = await lockRow(tx, 'softSensor', row);
    await refuseSecondProposal(tx, sensor);
    const { reply, pairIds, revision } = await evidenceNow(tx, sensor, context.clock());
    if (!reply.ok) throw new AppError('not-enough-data', evidenceRefusalSentence(reply));
    const { evidence } = reply;
    if (evidence.used !== body.seen.used || evidence.to !== body.seen.to)
      throw stale('evidence', { ...evidence });
    refuseMonitored(sensor, body.kind);
    const candidate = evidence.candidates.find(({ kind }) => kind === body.kind);
    if (!candidate || candidate.slope === null || candidate.offset === null) {
      throw invalidInput([
        { path: 'kind', message: 'There is no figure for this correction. Choose another.' },
      ]);
    }
    const before = evidence.candidates[0]!;
    const made = await addCalibration(tx, sensor, {
      revisionId: revision!.id,
      kind: body.kind,
      slope: candidate.slope,
      offset: candidate.offset,
      slopeBefore: before.slope!,
      offsetBefore: before.offset!,
      evidence,
      pairIds,
      reason: body.reason,
      proposedAt: context.clock(),
      proposedBy: by.actor.id,
      toBeEntered: revision!.model.form === 'external' && body.kind !== 'as-found',
    });
    await note(context, tx, by, sensor, 'propose', 'recalibration', null, told(made), body.reason);
    return getCalibration(tx, made);
  });
}

function refuseMonitored({ correctionMode }: SensorRow, kind: string): void {
  if (correctionMode !== 'monitor' || kind === 'as-found') return;
  const message =
    'This soft sensor is monitored only. Leave it as found, or change its correction mode on the data sheet first.';
  throw invalidInput([{ path: 'kind', message }]);
}

type NewCalibration = Omit<
  typeof calibrations.$inferInsert,
  'siteId' | 'softSensorId' | 'number' | 'ownerId'
>;

/** Adds a calibration with its number and the owner at that time. */
export async function addCalibration(
  tx: Tx,
  sensor: SensorRow,
  row: NewCalibration,
): Promise<CalibrationRow> {
  const key = { siteId: sensor.siteId, softSensorId: sensor.id };
  const number = await nextNumber(tx, sensor.siteId, sensor.id);
  const ownerId = (await currentOwnership(tx, sensor.siteId, sensor.id))?.ownerId ?? null;
  const [made] = await tx
    .insert(calibrations)
    .values({ ...key, number, ownerId, ...row })
    .returning();
  return made!;
}

export async function refuseSecondProposal(tx: Tx, sensor: SensorRow): Promise<void> {
  const waiting = await findWaiting(tx, sensor.siteId, sensor.id);
  if (waiting) {
    throw new AppError(
      'conflict',
      `Recalibration ${waiting.number} waits for a decision already. Wait for it, or have it withdrawn first.`,
    );
  }
}

/** What the audit trail keeps of a calibration. */
export const told = ({ number, kind, slope, offset }: CalibrationRow) => ({ number, kind, slope, offset });

/** Approves or declines; never by the proposer, and never on evidence that no longer stands. */
export async function decideCalibration(
  context: Context,
  by: By,
  row: Permitted<CalibrationRow>,
  body: Body<'calibrations.decide'>,
): Promise<Calibration> {
  return context.db.transaction(async (tx) => {
    const calibration = await lockRow(tx, 'calibration', row);
    const sensor = (await findSensor(tx, row.siteId, row.softSensorId))!;
    const ownership = await currentOwnership(tx, row.siteId, row.softSensorId);
    const approverId = ownership?.approverId ?? null;
    const refusal = mayDecide(by.actor, { ...calibration, approverId, editedBy: [] });
    if (refusal) throw new AppError('forbidden', refusals[refusal]);
    refuseDecided(calibration);
    const ownerId = ownership?.ownerId ?? null;
    if (ownerId !== body.ownerId) throw stale('owner', { ownerId });
    const now = context.clock();
    const approved = body.decision === 'approved';
    if (approved) await refuseOvertaken(tx, calibration);
    const effectiveFrom = approved && !calibration.toBeEntered ? startOf(body.effectiveFrom, now) : null;
    await tx
      .update(calibrations)
      .set({
        decision: body.decision,
        decidedAt: now,
        decidedBy: by.actor.id,
        decisionReason: body.reason,
        effectiveFrom,
      })
      .where(eq(calibrations.id, calibration.id));
    if (approved) {
      await recalibrationDone(context, tx, by, sensor, calibration.id);
      await queueJudging(tx, sensor.siteId, sensor.id);
    }
    const after = {
      ...told(calibration),
      decision: body.decision,
      effectiveFrom: effectiveFrom?.toISOString() ?? null,
    };
    await note(context, tx, by, sensor, 'decide', 'recalibration', told(calibration), after, body.reason);
    return getCalibration(tx, calibration);
  });
}

export function refuseDecided({ number, decision }: CalibrationRow): void {
  if (decision !== null) throw new AppError('conflict', `Recalibration ${number} was ${decision} already.`);
}

/** Evidence that was overtaken can be declined, not approved: by a new revision, or because its samples were revised. */
async function refuseOvertaken(tx: Tx, calibration: CalibrationRow): Promise<void> {
  const inForce = (await approvedRevisions(tx, calibration.siteId, calibration.softSensorId)).at(-1);
  if (inForce?.id !== calibration.revisionId) {
    throw new AppError(
      'conflict',
      `Revision ${inForce?.number} came into force after this was proposed, so its figures no longer fit. Decline it; a new one can be proposed from samples of the new revision.`,
    );
  }
  const revised = await revisedSamples(tx, calibration);
  if (revised.length > 0) {
    const names = revised.slice(0, 3).join(', ');
    const rest = revised.length > 3 ? ` and ${revised.length - 3} more` : '';
    throw new AppError(
      'conflict',
      `${revised.length === 1 ? 'Sample' : 'Samples'} ${names}${rest} changed after this was proposed, so its evidence no longer stands. Decline it and let it be proposed again.`,
    );
  }
}

function startOf(wanted: string | null, now: Date): Date {
  if (wanted === null) return now;
  const at = new Date(wanted);
  const say = (message: string) => invalidInput([{ path: 'effectiveFrom', message }]);
  if (at < now)
    throw say('A correction can’t be in force before its approval. Choose a later time, or none for now.');
  if (at.getTime() > now.getTime() + longestAheadMs) {
    throw say('At most 31 days ahead: what is true of today’s samples may not be true then.');
  }
  return at;
}
