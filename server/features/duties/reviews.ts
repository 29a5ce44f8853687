import { and, desc, eq } from 'drizzle-orm';
import type { Review, ReviewAnswers, ReviewConclusion } from '../../../shared/contracts/duties.ts';
import { AppError } from '../../../shared/contracts/errors.ts';
import type { Context } from '../../context.ts';
import type { Queryable } from '../../db/client.ts';
import { persons, reviews } from '../../db/schema/index.ts';
import { type Permitted, lockRow } from '../../http/rows.ts';
import type { SensorRow } from '../estimates/repo.ts';
import { lifeNow } from '../judging/repo.ts';
import { note } from '../register/note.ts';
import type { By } from '../register/service.ts';
import { syncSensor } from './service.ts';

/** Records a review; the open review duty is done with it, and the next one opens. */
export async function addReview(
  context: Context,
  by: By,
  row: Permitted<SensorRow>,
  body: { conclusion: ReviewConclusion; answers: ReviewAnswers; note: string },
): Promise<Review> {
  return context.db.transaction(async (tx) => {
    const sensor = await lockRow(tx, 'softSensor', row);
    const life = await lifeNow(tx, sensor.siteId, sensor.id);
    if (life?.state !== 'in-service' && life?.state !== 'suspended') {
      throw new AppError('conflict', 'Only a soft sensor that is in service is reviewed.');
    }
    const now = context.clock();
    const key = { siteId: sensor.siteId, softSensorId: sensor.id };
    const [made] = await tx
      .insert(reviews)
      .values({ ...key, ...body, doneAt: now, doneBy: by.actor.id })
      .returning();
    await syncSensor(tx, key, now, { kind: 'review', recordId: made!.id });
    await note(context, tx, by, sensor, 'decide', 'review', null, { ...body }, body.note);
    return {
      id: made!.id,
      ...body,
      doneAt: now.toISOString(),
      doneBy: { id: by.actor.id, name: by.actor.name },
    };
  });
}

/** Reviews of a soft sensor, newest first. */
export async function listReviews(db: Queryable, siteId: number, softSensorId: number): Promise<Review[]> {
  const rows = await db
    .select({ review: reviews, doneBy: { id: persons.id, name: persons.name } })
    .from(reviews)
    .innerJoin(persons, eq(persons.id, reviews.doneBy))
    .where(and(eq(reviews.siteId, siteId), eq(reviews.softSensorId, softSensorId)))
    .orderBy(desc(reviews.doneAt), desc(reviews.id));
  return rows.map(({ review: { id, doneAt, conclusion, answers, note: text }, doneBy }) => ({
    id,
    doneAt: doneAt.toISOString(),
    doneBy,
    conclusion,
    answers,
    note: text,
  }));
}
