import type { z } from 'zod';
import type { CheckResult, CheckStandard } from '../../../shared/contracts/precision.ts';
import { AppError } from '../../../shared/contracts/errors.ts';
import type { laboratory as contract } from '../../../shared/contracts/laboratory.ts';
import { readTypedList, readTypedNumber } from '../../../shared/rules/typed-result.ts';
import type { Context } from '../../context.ts';
import type { Tx } from '../../db/client.ts';
import { invalidInput } from '../../http/parse.ts';
import { type Permitted, lockRow } from '../../http/rows.ts';
import { stale } from '../../http/stale.ts';
import { toWire } from '../../http/wire.ts';
import { lastSaveOf, recordAudit } from '../audit/service.ts';
import type { By } from '../register/service.ts';
import type { MethodRow } from '../samples/points-repo.ts';
import { archivedAt } from '../sites/service.ts';
import {
  type ResultRow,
  type StandardRow,
  getResult,
  getStandard,
  insertResult,
  insertStandard,
  setResultWithdrawn,
  setStandard,
  standardName,
  standardNameTaken,
} from './standards-repo.ts';

type Body<K extends 'checkStandards.add' | 'checkStandards.change' | 'checkResults.add'> = z.output<
  (typeof contract)[K]['body']
>;

export async function addStandard(
  context: Context,
  by: By,
  method: Permitted<MethodRow>,
  { name, acceptedValue }: Body<'checkStandards.add'>,
): Promise<CheckStandard> {
  return context.db.transaction(async (tx) => {
    const { siteId, id: methodId } = await lockRow(tx, 'method', method);
    await refuseName(tx, { siteId, methodId }, name, null);
    const accepted = acceptedOf(acceptedValue);
    const made = await insertStandard(tx, { siteId, methodId, name, acceptedValue: accepted });
    await note(context, tx, by, 'check-standard', 'add', { ...made, name }, null, made);
    return toWire(await getStandard(tx, made));
  });
}

export async function changeStandard(
  context: Context,
  by: By,
  row: Permitted<StandardRow>,
  body: Body<'checkStandards.change'>,
): Promise<CheckStandard> {
  return context.db.transaction(async (tx) => {
    const before = await lockRow(tx, 'checkStandard', row);
    if (before.version !== body.version) {
      const last = await lastSaveOf(tx, 'check-standard', row.id);
      throw stale('check standard', toWire({ ...(await getStandard(tx, before)) }), last);
    }
    await refuseName(tx, before, body.name, row.id);
    const values = {
      name: body.name,
      acceptedValue: acceptedOf(body.acceptedValue),
      archivedAt: archivedAt(context, before.archivedAt, body.archived),
      version: body.version + 1,
    };
    await setStandard(tx, row, values);
    const after = { ...before, ...values };
    await note(context, tx, by, 'check-standard', 'change', after, before, after);
    return toWire(await getStandard(tx, after));
  });
}

function acceptedOf(text: string): number {
  const read = readTypedNumber(text);
  if (!read.ok) throw invalidInput([{ path: 'acceptedValue', message: read.message }]);
  return read.value;
}

async function refuseName(
  tx: Tx,
  of: Pick<StandardRow, 'siteId' | 'methodId'>,
  name: string,
  exceptId: number | null,
): Promise<void> {
  if (!(await standardNameTaken(tx, of, name, exceptId))) return;
  const message = `There is a check standard ${name} of this method already. Choose another name.`;
  throw invalidInput([{ path: 'name', message }]);
}

const aheadMs = 10 * 60_000;

/** Adds a series of results on a check standard, typed one to a line. */
export async function addResults(
  context: Context,
  by: By,
  row: Permitted<StandardRow>,
  { values, measuredAt, analyst }: Body<'checkResults.add'>,
): Promise<CheckResult> {
  return context.db.transaction(async (tx) => {
    const standard = await lockRow(tx, 'checkStandard', row);
    if (standard.archivedAt !== null) {
      throw new AppError('conflict', `${standard.name} is archived. Take it back before adding results.`);
    }
    const now = context.clock();
    const read = readTypedList(values);
    if (!read.ok) throw invalidInput([{ path: 'values', message: read.message }]);
    const at = new Date(measuredAt);
    if (at.getTime() > now.getTime() + aheadMs) {
      const message = 'This is still to come. Check the date and the time.';
      throw invalidInput([{ path: 'measuredAt', message }]);
    }
    const made = await insertResult(tx, {
      siteId: standard.siteId,
      standardId: standard.id,
      measuredAt: at,
      analyst,
      values: read.values,
      recordedBy: by.actor.id,
      recordedAt: now,
    });
    await note(context, tx, by, 'check-result', 'add', { ...made, name: standard.name }, null, made);
    return toWire(await getResult(tx, made.siteId, made.id));
  });
}

/** Withdraws a series of results; it stays on record and counts no more. */
export async function withdrawResults(
  context: Context,
  by: By,
  row: Permitted<ResultRow>,
  { reason }: { reason: string },
): Promise<CheckResult> {
  return context.db.transaction(async (tx) => {
    const before = await lockRow(tx, 'checkResult', row);
    if (before.withdrawnAt !== null) {
      throw new AppError('conflict', 'This series was withdrawn already. Load the page again to see it.');
    }
    const withdrawn = { withdrawnAt: context.clock(), withdrawnReason: reason };
    await setResultWithdrawn(tx, before, withdrawn);
    const after = { ...before, ...withdrawn };
    const name = await standardName(tx, row);
    await note(context, tx, by, 'check-result', 'remove', { ...after, name }, before, after, reason);
    return toWire(await getResult(tx, row.siteId, row.id));
  });
}

async function note(
  context: Context,
  tx: Tx,
  by: By,
  entity: 'check-standard' | 'check-result',
  action: 'add' | 'change' | 'remove',
  row: { id: number; siteId: number; name: string },
  before: object | null,
  after: object,
  reason = '',
): Promise<void> {
  await recordAudit(tx, {
    at: context.clock(),
    siteId: row.siteId,
    ...by,
    action,
    entity,
    entityId: row.id,
    entityName: row.name,
    before: before && toWire({ ...before }),
    after: toWire({ ...after }),
    reason,
  });
}
