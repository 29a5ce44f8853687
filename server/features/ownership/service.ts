import { and, eq, isNull } from 'drizzle-orm';
import { AppError } from '../../../shared/contracts/errors.ts';
import type { Handover, OwnerPart } from '../../../shared/contracts/ownership.ts';
import type { Context } from '../../context.ts';
import type { Tx } from '../../db/client.ts';
import { handovers } from '../../db/schema/index.ts';
import { invalidInput } from '../../http/parse.ts';
import { type Permitted, type RowOf, lockRow } from '../../http/rows.ts';
import { type SensorRow, findSensor } from '../estimates/repo.ts';
import { listPeopleAtSite, namesOf } from '../people/repo.ts';
import { note } from '../register/note.ts';
import { currentOwnership } from '../register/repo.ts';
import type { By } from '../register/service.ts';
import { type Holders, recordOwnership, withPart } from './change.ts';
import { mayWithdraw, readHandover } from './repo.ts';

type HandoverRow = RowOf<'handover'>;
type Offer = { part: OwnerPart; toId: number; reason: string };

const nobody: Holders = { ownerId: null, deputyId: null, approverId: null };

/** Offers a part to a successor. Whoever names themself takes it at once, and an offer of it that waits is taken back. */
export async function proposeHandover(
  context: Context,
  by: By,
  row: Permitted<SensorRow>,
  offer: Offer,
): Promise<Handover> {
  return context.db.transaction(async (tx) => {
    const sensor = await lockRow(tx, 'softSensor', row);
    const now: Holders = (await currentOwnership(tx, sensor.siteId, sensor.id)) ?? nobody;
    const own = offer.toId === by.actor.id;
    if (!own) refuseStranger(by, sensor.siteId, now);
    await refuseUnfit(tx, sensor, now, offer);
    const waiting = await waitingOffer(tx, sensor, offer.part);
    if (waiting && !own) await refuseSecondOffer(tx, waiting);
    if (waiting) await answerRow(context, tx, by, waiting, 'withdrawn', 'Somebody took the part meanwhile.');
    const at = context.clock();
    const [made] = await tx
      .insert(handovers)
      .values({
        siteId: sensor.siteId,
        softSensorId: sensor.id,
        part: offer.part,
        fromId: offer.part === 'owner' ? now.ownerId : now.deputyId,
        toId: offer.toId,
        proposedAt: at,
        proposedBy: by.actor.id,
        reason: offer.reason,
        ...(own ? { answer: 'accepted' as const, answeredAt: at, answeredBy: by.actor.id } : {}),
      })
      .returning();
    if (own) {
      const recorded = { personId: by.actor.id, at, reason: offer.reason };
      await recordOwnership(tx, sensor, withPart(now, offer.part, offer.toId), recorded);
    }
    const after = { part: offer.part, toId: offer.toId };
    await note(
      context,
      tx,
      by,
      sensor,
      own ? 'change' : 'propose',
      'handover',
      { ...now },
      after,
      offer.reason,
    );
    return readHandover(tx, by.actor, sensor.siteId, made!.id);
  });
}

function refuseStranger(by: By, siteId: number, now: Holders): void {
  const { id, roles } = by.actor;
  const manager = roles.some((held) => held.siteId === siteId && held.role === 'manager');
  if (manager || id === now.ownerId || id === now.deputyId) return;
  throw new AppError(
    'forbidden',
    'Only the owner, the deputy or a manager of the site offers this to somebody else. You may name yourself.',
  );
}

async function refuseUnfit(tx: Tx, sensor: SensorRow, now: Holders, { part, toId }: Offer): Promise<void> {
  const say = (message: string) => invalidInput([{ path: 'toId', message }]);
  const person = (await listPeopleAtSite(tx, sensor.siteId)).find(({ id }) => id === toId);
  if (!person?.roles.includes('engineer')) {
    throw say(
      `The ${part} must be an engineer of the site. Choose somebody who is, or ask an administrator for the role.`,
    );
  }
  if (toId === (part === 'owner' ? now.ownerId : now.deputyId))
    throw say(`${person.name} is the ${part} already.`);
  if (part === 'deputy' && toId === now.ownerId)
    throw say('The deputy must be another person than the owner.');
}

async function waitingOffer(tx: Tx, sensor: SensorRow, part: OwnerPart): Promise<HandoverRow | null> {
  const key = and(eq(handovers.siteId, sensor.siteId), eq(handovers.softSensorId, sensor.id));
  const [row] = await tx
    .select()
    .from(handovers)
    .where(and(key, eq(handovers.part, part), isNull(handovers.answer)));
  return row ?? null;
}

async function refuseSecondOffer(tx: Tx, waiting: HandoverRow): Promise<never> {
  const asked = (await namesOf(tx, [waiting.toId])).get(waiting.toId);
  throw new AppError(
    'conflict',
    `${asked} was asked already and has not answered. Take that offer back first.`,
  );
}

async function answerRow(
  context: Context,
  tx: Tx,
  by: By,
  row: HandoverRow,
  answer: 'accepted' | 'declined' | 'withdrawn',
  answerReason: string,
): Promise<void> {
  await tx
    .update(handovers)
    .set({ answer, answeredAt: context.clock(), answeredBy: by.actor.id, answerReason })
    .where(and(eq(handovers.siteId, row.siteId), eq(handovers.id, row.id)));
}

/** The successor accepts, and has the part from now on, or declines. */
export async function answerHandover(
  context: Context,
  by: By,
  row: Permitted<HandoverRow>,
  body: { answer: 'accepted' | 'declined'; reason: string },
): Promise<Handover> {
  return context.db.transaction(async (tx) => {
    const { waiting, sensor } = await lockOffer(tx, row);
    if (waiting.toId !== by.actor.id)
      throw new AppError('forbidden', 'Only the person who was asked answers this.');
    const now: Holders = (await currentOwnership(tx, sensor.siteId, sensor.id)) ?? nobody;
    if (body.answer === 'accepted') await refuseUnfit(tx, sensor, now, waiting);
    await answerRow(context, tx, by, waiting, body.answer, body.reason);
    if (body.answer === 'accepted') {
      const recorded = { personId: by.actor.id, at: context.clock(), reason: waiting.reason };
      await recordOwnership(tx, sensor, withPart(now, waiting.part, waiting.toId), recorded);
    }
    const after = { part: waiting.part, toId: waiting.toId, answer: body.answer };
    await note(context, tx, by, sensor, 'decide', 'handover', { ...now }, after, body.reason);
    return readHandover(tx, by.actor, waiting.siteId, waiting.id);
  });
}

export async function withdrawHandover(
  context: Context,
  by: By,
  row: Permitted<HandoverRow>,
): Promise<Handover> {
  return context.db.transaction(async (tx) => {
    const { waiting, sensor } = await lockOffer(tx, row);
    if (!mayWithdraw(by.actor, waiting)) {
      throw new AppError('conflict', 'Only who made this offer, or a manager of the site, takes it back.');
    }
    await answerRow(context, tx, by, waiting, 'withdrawn', '');
    await note(context, tx, by, sensor, 'change', 'handover', { answer: null }, { answer: 'withdrawn' });
    return readHandover(tx, by.actor, waiting.siteId, waiting.id);
  });
}

/** Soft sensor first, then the offer: the order in which every change of ownership locks. */
async function lockOffer(tx: Tx, row: Permitted<HandoverRow>) {
  const found = (await findSensor(tx, row.siteId, row.softSensorId)) as Permitted<SensorRow>;
  const sensor = await lockRow(tx, 'softSensor', found);
  const waiting = await lockRow(tx, 'handover', row);
  if (waiting.answer !== null) throw new AppError('conflict', `This offer was ${waiting.answer} already.`);
  return { waiting, sensor };
}
