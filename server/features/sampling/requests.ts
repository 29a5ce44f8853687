import { and, eq } from 'drizzle-orm';
import type { SampleRequest } from '../../../shared/contracts/sampling.ts';
import { AppError } from '../../../shared/contracts/errors.ts';
import type { Context } from '../../context.ts';
import type { Queryable } from '../../db/client.ts';
import { sampleRequests } from '../../db/schema/index.ts';
import { invalidInput } from '../../http/parse.ts';
import { type Permitted, type RowOf, lockRow } from '../../http/rows.ts';
import { toWire } from '../../http/wire.ts';
import { recordAudit } from '../audit/service.ts';
import type { SensorRow } from '../estimates/repo.ts';
import { lifeNow } from '../judging/repo.ts';
import type { By } from '../register/service.ts';
import { listRequests } from './repo.ts';

type RequestRow = RowOf<'sampleRequest'>;
const backMs = 24 * 3_600_000;
const farthestMs = 366 * 24 * 3_600_000;

interface Wish {
  count: number;
  fromAt: string;
  untilAt: string;
  reason: string;
}

/** Requests of a site that are neither over, withdrawn nor answered in full. */
export async function openRequests(db: Queryable, siteId: number, now: Date): Promise<SampleRequest[]> {
  const requests = await listRequests(db, siteId, now);
  return toWire(requests.filter(({ taken, count }) => taken < count).map(shown));
}

const shown = ({ takenBefore: _before, ...request }: Awaited<ReturnType<typeof listRequests>>[number]) =>
  request;

async function readRequest(db: Queryable, siteId: number, id: number): Promise<SampleRequest> {
  const [found] = await listRequests(db, siteId, new Date(0), id);
  return toWire(shown(found!));
}

/** Asks the laboratory for samples of a soft sensor, which stand in the list of each shift until they are taken. */
export async function askForSamples(
  context: Context,
  by: By,
  sensor: Permitted<SensorRow>,
  wish: Wish,
): Promise<SampleRequest> {
  return context.db.transaction(async (tx) => {
    const { siteId, id, samplePointId, tagName } = await lockRow(tx, 'softSensor', sensor);
    if (samplePointId === null) {
      throw new AppError('conflict', `${tagName} has no sample point. Name one on its data sheet first.`);
    }
    if ((await lifeNow(tx, siteId, id))?.state === 'retired')
      throw new AppError('conflict', `${tagName} is retired; nothing is asked of the laboratory for it.`);
    const now = context.clock();
    const [fromAt, untilAt] = [new Date(wish.fromAt), new Date(wish.untilAt)];
    refuseSpan(fromAt, untilAt, now);
    const { count, reason } = wish;
    const [made] = await tx
      .insert(sampleRequests)
      .values({
        siteId,
        softSensorId: id,
        samplePointId,
        count,
        fromAt,
        untilAt,
        reason,
        askedBy: by.actor.id,
        askedAt: now,
      })
      .returning();
    await note(context, tx, by, made!, tagName, 'add', null, { count, fromAt, untilAt });
    return readRequest(tx, siteId, made!.id);
  });
}

function refuseSpan(fromAt: Date, untilAt: Date, now: Date): void {
  const wrong = (path: string, message: string) => invalidInput([{ path, message }]);
  if (untilAt <= fromAt || untilAt <= now)
    throw wrong('untilAt', 'The time to take them must end later than now, and after it begins.');
  if (untilAt.getTime() > now.getTime() + farthestMs)
    throw wrong('untilAt', 'The time to take them ends more than a year ahead. Ask anew by then.');
  // Samples that were taken before somebody asked answer nothing.
  if (fromAt.getTime() < now.getTime() - backMs)
    throw wrong('fromAt', 'This time lies more than a day back. Ask for samples from now on.');
}

/** No longer asks; what was taken meanwhile stands. */
export async function withdrawRequest(
  context: Context,
  by: By,
  row: Permitted<RequestRow>,
  body: { version: number },
): Promise<SampleRequest> {
  return context.db.transaction(async (tx) => {
    const locked = await lockRow(tx, 'sampleRequest', row);
    const before = await readRequest(tx, row.siteId, row.id);
    if (locked.version !== body.version || locked.withdrawnAt !== null) {
      const message = 'This request was changed or withdrawn meanwhile. What stands now is shown.';
      throw new AppError('stale', message, { current: { ...before } });
    }
    const withdrawnAt = context.clock();
    await tx
      .update(sampleRequests)
      .set({ withdrawnAt, withdrawnBy: by.actor.id, version: locked.version + 1 })
      .where(and(eq(sampleRequests.siteId, row.siteId), eq(sampleRequests.id, row.id)));
    await note(context, tx, by, locked, before.tagName, 'cancel', { withdrawnAt: null }, { withdrawnAt });
    return readRequest(tx, row.siteId, row.id);
  });
}

async function note(
  context: Context,
  tx: Parameters<typeof recordAudit>[0],
  by: By,
  row: RequestRow,
  tagName: string,
  action: 'add' | 'cancel',
  before: Record<string, unknown> | null,
  after: Record<string, unknown>,
): Promise<void> {
  await recordAudit(tx, {
    at: context.clock(),
    siteId: row.siteId,
    ...by,
    action,
    entity: 'sample-request',
    entityId: row.id,
    entityName: tagName,
    before,
    after,
    reason: row.reason,
  });
}
