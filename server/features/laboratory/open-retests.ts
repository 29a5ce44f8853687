import type { Context } from '../../context.ts';
import type { Tx } from '../../db/client.ts';
import { toWire } from '../../http/wire.ts';
import { recordAudit } from '../audit/service.ts';
import type { By } from '../register/service.ts';
import type { SampleRow } from './repo.ts';
import { type RetestRow, lockOpenRetest, setRetest } from './retests-repo.ts';

/** The re-test that is open on a sample goes with it to its new version. */
export async function moveOpenRetest(tx: Tx, old: SampleRow, made: SampleRow): Promise<void> {
  const open = await lockOpenRetest(tx, old.siteId, old.id);
  if (open) await setRetest(tx, open, { sampleId: made.id });
}

/** Closes the re-test that is open on a sample, where something else settled what becomes of it. */
export async function settleOpenRetest(
  context: Context,
  tx: Tx,
  by: By,
  sample: SampleRow,
  why: string,
): Promise<void> {
  const open = await lockOpenRetest(tx, sample.siteId, sample.id);
  if (open) await closeRetest(context, tx, by, sample, open, { answer: 'not-needed', note: why });
}

/**
 * Closes the re-test that is open on a sample with a result that a file brought.
 * @param result the sample that took the place of the one in question
 */
export async function settleByResult(
  context: Context,
  tx: Tx,
  by: By,
  sample: SampleRow,
  result: SampleRow,
): Promise<void> {
  const open = await lockOpenRetest(tx, sample.siteId, sample.id);
  if (!open) return;
  await closeRetest(context, tx, by, sample, open, { answer: 'result', note: '', resultSampleId: result.id });
}

export async function closeRetest(
  context: Context,
  tx: Tx,
  by: By,
  sample: SampleRow,
  open: RetestRow,
  answer: { answer: 'result' | 'no-bottle' | 'not-needed'; note: string; resultSampleId?: number },
): Promise<void> {
  const answered = { ...answer, answeredBy: by.actor.id, answeredAt: context.clock() };
  await setRetest(tx, open, answered);
  await noteRetest(context, tx, by, 'decide', { ...open, ...answered }, sample.sampleNumber, open);
}

export async function noteRetest(
  context: Context,
  tx: Tx,
  by: By,
  action: 'add' | 'decide',
  row: RetestRow,
  sampleNumber: string,
  before: RetestRow | null,
): Promise<void> {
  await recordAudit(tx, {
    at: context.clock(),
    siteId: row.siteId,
    ...by,
    action,
    entity: 're-test',
    entityId: row.id,
    entityName: sampleNumber,
    before: before && toWire({ ...before }),
    after: toWire({ ...row }),
    reason: action === 'add' ? row.reason : row.note,
  });
}
