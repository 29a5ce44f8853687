import { AppError } from '../../../shared/contracts/errors.ts';
import { isHold } from '../../../shared/rules/sample-row.ts';
import { sayStands } from '../../../shared/rules/laboratory-sentences.ts';
import type { Context } from '../../context.ts';
import type { Tx } from '../../db/client.ts';
import { invalidInput } from '../../http/parse.ts';
import { type Permitted, lockRow } from '../../http/rows.ts';
import { toWire } from '../../http/wire.ts';
import { recordAudit } from '../audit/service.ts';
import { samplesChanged } from '../judging/changed.ts';
import type { By } from '../register/service.ts';
import { readHistory } from './history.ts';
import { type SampleRow, insertSample, numberTaken, setSample } from './repo.ts';

/** What a new version says anew; everything else is as in the one it takes the place of. */
export type Anew = Partial<
  Pick<
    SampleRow,
    | 'value'
    | 'qualifier'
    | 'asWritten'
    | 'statedUnit'
    | 'statedValue'
    | 'replicates'
    | 'takenAt'
    | 'takenOn'
    | 'reportedAt'
    | 'samplePointId'
    | 'methodId'
    | 'sampleNumber'
    | 'analyst'
    | 'heldSince'
  >
>;

/** Locks a sample that is to be changed; one that no longer stands is refused with what stands now. */
export async function lockStanding(
  tx: Tx,
  row: Permitted<SampleRow>,
  version: number,
): Promise<Permitted<SampleRow>> {
  const locked = await lockRow(tx, 'sample', row);
  if (locked.supersededAt === null && locked.withdrawnAt === null && locked.version === version)
    return locked;
  const history = await readHistory(tx, row);
  const message = sayStands(history);
  // Withdrawn for good: there is nothing to compare with.
  if (locked.withdrawnAt !== null) throw new AppError('conflict', message);
  throw new AppError('stale', message, { current: { ...history } });
}

/** Puts a new version in the place of a sample; both are kept. */
export async function supersede(
  tx: Tx,
  by: By,
  old: SampleRow,
  anew: Anew,
  reason: string,
  now: Date,
): Promise<SampleRow> {
  const next: SampleRow = { ...old, ...anew };
  if (await numberTaken(tx, old.siteId, next, old.id)) {
    const message = `There is another sample ${next.sampleNumber} at that point already. Choose another number or point.`;
    throw invalidInput([{ path: 'sampleNumber', message }]);
  }
  await setSample(tx, old, { supersededAt: now });
  const { id: _id, importId: _importId, line: _line, entryKey: _entryKey, ...kept } = next;
  return insertSample(tx, {
    ...kept,
    version: old.version + 1,
    flags: flagsOf(old, next),
    supersedesId: old.id,
    changeReason: reason,
    enteredBy: by.actor.id,
    enteredAt: now,
    supersededAt: null,
    withdrawnAt: null,
  });
}

/**
 * Flags that follow from the result itself are found anew. Those that held the old value say nothing of another one,
 * unless that is held in turn.
 */
function flagsOf(old: SampleRow, next: SampleRow): string[] {
  const derived = {
    censored: next.qualifier !== null,
    'date-only': next.takenAt === null,
    converted: next.statedUnit !== null,
    averaged: next.replicates !== null && next.replicates.length > 1,
  };
  const cleared = next.value !== old.value && next.heldSince === null;
  const kept = old.flags.filter((flag) => !(flag in derived) && !(cleared && isHold(flag)));
  const found = Object.entries(derived).filter(([, is]) => is);
  return [...kept, ...found.map(([flag]) => flag)];
}

/** Has the soft sensors at these samples' points judged again. */
export async function judgeAgain(tx: Tx, ...rows: readonly SampleRow[]): Promise<void> {
  const samplePointIds = [...new Set(rows.map(({ samplePointId }) => samplePointId))];
  await samplesChanged(tx, { siteId: rows[0]!.siteId, samplePointIds });
}

/** A sample as the audit trail keeps it. */
const told = ({ siteId: _siteId, id: _id, ...row }: SampleRow): Record<string, unknown> => toWire(row);

export async function noteSample(
  context: Context,
  tx: Tx,
  by: By,
  action: 'change' | 'decide' | 'remove',
  row: SampleRow,
  sides: { before: SampleRow; after: SampleRow },
  reason: string,
): Promise<void> {
  await recordAudit(tx, {
    at: context.clock(),
    siteId: row.siteId,
    ...by,
    action,
    entity: 'sample',
    entityId: row.id,
    entityName: row.sampleNumber,
    before: told(sides.before),
    after: told(sides.after),
    reason,
  });
}

/** Takes a sample out within a transaction that has it locked. */
export async function takeOut(
  context: Context,
  tx: Tx,
  by: By,
  old: SampleRow,
  reason: string,
): Promise<void> {
  const withdrawnAt = context.clock();
  await setSample(tx, old, { withdrawnAt });
  await judgeAgain(tx, old);
  await noteSample(context, tx, by, 'remove', old, { before: old, after: { ...old, withdrawnAt } }, reason);
}

/** Lets a held sample count within a transaction that has it locked; its pairs that did not are found anew. */
export async function letCount(
  context: Context,
  tx: Tx,
  by: By,
  old: SampleRow,
  reason: string,
): Promise<void> {
  await setSample(tx, old, { heldSince: null });
  await judgeAgain(tx, old);
  await noteSample(
    context,
    tx,
    by,
    'decide',
    old,
    { before: old, after: { ...old, heldSince: null } },
    reason,
  );
}
