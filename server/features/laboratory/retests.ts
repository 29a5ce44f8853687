import type { z } from 'zod';
import { AppError } from '../../../shared/contracts/errors.ts';
import type { laboratory as contract } from '../../../shared/contracts/laboratory.ts';
import type { Retest } from '../../../shared/contracts/standing-samples.ts';
import type { Context } from '../../context.ts';
import type { Tx } from '../../db/client.ts';
import { invalidInput } from '../../http/parse.ts';
import { type Permitted, lockRow } from '../../http/rows.ts';
import { toWire } from '../../http/wire.ts';
import type { By } from '../register/service.ts';
import { closeRetest, noteRetest } from './open-retests.ts';
import { type SampleRow, setSample } from './repo.ts';
import { type RetestRow, addRetest, getRetest, lockOpenRetest } from './retests-repo.ts';
import { typedValue } from './typed-value.ts';
import { judgeAgain, letCount, lockStanding, noteSample, supersede, takeOut } from './versions.ts';

type Answer = z.output<(typeof contract)['retests.answer']['body']>;

/** Asks the laboratory to analyse a sample once more; its result is held until that is answered. */
export async function askRetest(
  context: Context,
  by: By,
  row: Permitted<SampleRow>,
  { reason }: { reason: string },
): Promise<Retest> {
  return context.db.transaction(async (tx) => {
    const sample = await lockStanding(tx, row, row.version);
    const open = await lockOpenRetest(tx, sample.siteId, sample.id);
    if (open) {
      const { askedBy } = await getRetest(tx, sample.siteId, open.id);
      throw new AppError('conflict', `${askedBy} has asked for a re-test of this sample already.`);
    }
    const now = context.clock();
    if (sample.heldSince === null) {
      await setSample(tx, sample, { heldSince: now });
      await judgeAgain(tx, sample);
    }
    const { siteId, id: sampleId } = sample;
    const made = await addRetest(tx, { siteId, sampleId, askedBy: by.actor.id, askedAt: now, reason });
    await noteRetest(context, tx, by, 'add', made, sample.sampleNumber, null);
    return toWire(await getRetest(tx, siteId, made.id));
  });
}

/** Answers the open re-test of a sample; what becomes of the held result is said with it. */
export async function answerRetest(
  context: Context,
  by: By,
  row: Permitted<SampleRow>,
  body: Answer,
): Promise<Retest> {
  return context.db.transaction(async (tx) => {
    const sample = await lockRow(tx, 'sample', row);
    const open = await lockOpenRetest(tx, sample.siteId, sample.id);
    if (!open) {
      throw new AppError(
        'conflict',
        'No re-test of this sample is open: it was answered, or never asked for.',
      );
    }
    if (body.answer === 'result') await takeResult(context, tx, by, sample, open, body);
    else await settle(context, tx, by, sample, open, body);
    return toWire(await getRetest(tx, sample.siteId, open.id));
  });
}

async function takeResult(
  context: Context,
  tx: Tx,
  by: By,
  sample: SampleRow,
  open: RetestRow,
  body: Extract<Answer, { answer: 'result' }>,
): Promise<void> {
  const now = context.clock();
  const typed = typedValue(sample, body.value, body.unit);
  if (!typed.ok) throw invalidInput(typed.fields);
  const reportedAt = body.reportedAt === undefined ? now : new Date(body.reportedAt);
  if (reportedAt > now || (sample.takenAt && reportedAt < sample.takenAt)) {
    const message = 'A re-test is reported after the sample was taken, and not later than now.';
    throw invalidInput([{ path: 'reportedAt', message }]);
  }
  const reason = body.note === '' ? 'Re-test' : `Re-test: ${body.note}`;
  const anew = { ...typed.anew, reportedAt, heldSince: null };
  const made = await supersede(tx, by, sample, anew, reason, now);
  const { note } = body;
  await closeRetest(context, tx, by, sample, open, { answer: 'result', note, resultSampleId: made.id });
  await judgeAgain(tx, sample);
  await noteSample(context, tx, by, 'change', made, { before: sample, after: made }, reason);
}

async function settle(
  context: Context,
  tx: Tx,
  by: By,
  sample: SampleRow,
  open: RetestRow,
  { answer, then, note }: Exclude<Answer, { answer: 'result' }>,
): Promise<void> {
  await closeRetest(context, tx, by, sample, open, { answer, note });
  const words = answer === 'no-bottle' ? 'Re-test: no bottle left' : 'Re-test: not needed';
  const reason = note === '' ? words : `${words}: ${note}`;
  if (then === 'withdraw') await takeOut(context, tx, by, sample, reason);
  else if (then === 'release') await letCount(context, tx, by, sample, reason);
}
