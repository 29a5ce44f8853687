import type { z } from 'zod';
import { AppError, type FieldProblem } from '../../../shared/contracts/errors.ts';
import type { laboratory as contract } from '../../../shared/contracts/laboratory.ts';
import type { SampleHistory } from '../../../shared/contracts/standing-samples.ts';
import type { Context } from '../../context.ts';
import type { Tx } from '../../db/client.ts';
import { invalidInput } from '../../http/parse.ts';
import type { Permitted } from '../../http/rows.ts';
import type { By } from '../register/service.ts';
import { findMethod, findPointInUse } from '../samples/points-repo.ts';
import { readHistory } from './history.ts';
import { moveOpenRetest, settleOpenRetest } from './open-retests.ts';
import type { SampleRow } from './repo.ts';
import { typedValue } from './typed-value.ts';
import { type Anew, judgeAgain, letCount, lockStanding, noteSample, supersede, takeOut } from './versions.ts';

type Correction = z.output<(typeof contract)['samples.correct']['body']>;

/** Corrects a sample: a new version stands from now on, the old one and what was decided on it are kept. */
export async function correctSample(
  context: Context,
  by: By,
  row: Permitted<SampleRow>,
  body: Correction,
): Promise<SampleHistory> {
  return context.db.transaction(async (tx) => {
    const old = await lockStanding(tx, row, body.version);
    const now = context.clock();
    const anew = await anewOf(tx, old, body, now);
    if (!differs(old, anew)) {
      throw new AppError('conflict', 'Nothing differs from what stands. Change what is wrong, then save.');
    }
    const made = await supersede(tx, by, old, anew, body.reason, now);
    await moveOpenRetest(tx, old, made);
    await judgeAgain(tx, old, made);
    await noteSample(context, tx, by, 'change', made, { before: old, after: made }, body.reason);
    return readHistory(tx, made);
  });
}

async function anewOf(tx: Tx, old: SampleRow, body: Correction, now: Date): Promise<Anew> {
  const { siteId } = old;
  const { samplePointId, methodId, sampleNumber, analyst } = body;
  const fields: FieldProblem[] = [];
  const anew: Anew = {};
  if (body.value !== undefined) {
    const typed = typedValue(old, body.value, body.unit);
    if (typed.ok) Object.assign(anew, typed.anew);
    else fields.push(...typed.fields);
  } else if (body.unit !== undefined && body.unit !== old.unit) {
    fields.push({ path: 'value', message: `Write the value in ${body.unit} too.` });
  }
  if (body.takenAt !== undefined) Object.assign(anew, { takenAt: new Date(body.takenAt), takenOn: null });
  if (body.reportedAt !== undefined) anew.reportedAt = new Date(body.reportedAt);
  fields.push(...timeProblems({ ...old, ...anew }, now));
  if (samplePointId !== undefined && samplePointId !== old.samplePointId) {
    if (await findPointInUse(tx, siteId, samplePointId)) anew.samplePointId = samplePointId;
    else fields.push({ path: 'samplePointId', message: foreign('sample point') });
  }
  if (methodId !== undefined && methodId !== old.methodId) {
    if (methodId === null || (await findMethod(tx, siteId, methodId))) anew.methodId = methodId;
    else fields.push({ path: 'methodId', message: foreign('method') });
  }
  if (sampleNumber !== undefined) anew.sampleNumber = sampleNumber;
  if (analyst !== undefined) anew.analyst = analyst || null;
  if (fields.length > 0) throw invalidInput(fields);
  return anew;
}

const foreign = (what: string) => `This ${what} is not one in use at the site. Choose another.`;
const aheadMs = 10 * 60_000;

function timeProblems(
  { takenAt, reportedAt }: Pick<SampleRow, 'takenAt' | 'reportedAt'>,
  now: Date,
): FieldProblem[] {
  const latest = now.getTime() + aheadMs;
  const problems: FieldProblem[] = [];
  if (takenAt && takenAt.getTime() > latest) {
    problems.push({ path: 'takenAt', message: 'This is still to come. Check the date and the time.' });
  } else if (takenAt && takenAt.getTime() < 0) {
    problems.push({ path: 'takenAt', message: 'This lies before 1970. Check the year.' });
  }
  if (reportedAt.getTime() > latest) {
    problems.push({ path: 'reportedAt', message: 'This is still to come. Check the date and the time.' });
  } else if (takenAt && reportedAt < takenAt) {
    const message = 'It can’t be reported before it was taken. One of the two times is wrong.';
    problems.push({ path: 'reportedAt', message });
  }
  return problems;
}

function differs(old: SampleRow, anew: Anew): boolean {
  return Object.entries(anew).some(([field, value]) => {
    const before = old[field as keyof SampleRow];
    return JSON.stringify(before ?? null) !== JSON.stringify(value ?? null);
  });
}

/** Withdraws a sample that is none; it stays on record and is judged by no more. */
export async function withdrawSample(
  context: Context,
  by: By,
  row: Permitted<SampleRow>,
  body: { reason: string; version: number },
): Promise<SampleHistory> {
  return context.db.transaction(async (tx) => {
    const old = await lockStanding(tx, row, body.version);
    await settleOpenRetest(context, tx, by, old, `The sample was withdrawn: ${body.reason}`);
    await takeOut(context, tx, by, old, body.reason);
    return readHistory(tx, old);
  });
}

/** Releases a held sample: it counts from now on. */
export async function releaseSample(
  context: Context,
  by: By,
  row: Permitted<SampleRow>,
  body: { reason: string; version: number },
): Promise<SampleHistory> {
  return context.db.transaction(async (tx) => {
    const old = await lockStanding(tx, row, body.version);
    if (old.heldSince === null) {
      throw new AppError('conflict', 'This sample is not held: it counts already.');
    }
    await settleOpenRetest(context, tx, by, old, `The sample was released: ${body.reason}`);
    await letCount(context, tx, by, old, body.reason);
    return readHistory(tx, old);
  });
}
