import { and, asc, desc, eq, inArray, isNotNull, isNull, type SQL } from 'drizzle-orm';
import { alias } from 'drizzle-orm/pg-core';
import type { Queryable } from '../../db/client.ts';
import { methods, persons, retests, samplePoints, samples } from '../../db/schema/index.ts';

export type RetestRow = typeof retests.$inferSelect;

const askers = alias(persons, 'askers');
const answerers = alias(persons, 'answerers');
const results = alias(samples, 'results');

const selectRetests = (db: Queryable, where: SQL | undefined) =>
  db
    .select({
      id: retests.id,
      sampleId: retests.sampleId,
      sampleNumber: samples.sampleNumber,
      samplePointId: samples.samplePointId,
      samplePoint: samplePoints.name,
      method: methods.name,
      value: samples.value,
      qualifier: samples.qualifier,
      unit: samples.unit,
      takenAt: samples.takenAt,
      takenOn: samples.takenOn,
      askedBy: askers.name,
      askedAt: retests.askedAt,
      reason: retests.reason,
      answer: retests.answer,
      answeredBy: answerers.name,
      answeredAt: retests.answeredAt,
      note: retests.note,
      resultSampleId: retests.resultSampleId,
      resultValue: results.value,
    })
    .from(retests)
    .innerJoin(samples, and(eq(samples.siteId, retests.siteId), eq(samples.id, retests.sampleId)))
    .innerJoin(
      samplePoints,
      and(eq(samplePoints.siteId, samples.siteId), eq(samplePoints.id, samples.samplePointId)),
    )
    .leftJoin(methods, and(eq(methods.siteId, samples.siteId), eq(methods.id, samples.methodId)))
    .innerJoin(askers, eq(askers.id, retests.askedBy))
    .leftJoin(answerers, eq(answerers.id, retests.answeredBy))
    .leftJoin(results, and(eq(results.siteId, retests.siteId), eq(results.id, retests.resultSampleId)))
    .where(where);

const mostAnswered = 100;

/** Open re-tests of a site, oldest first, then the last answered. */
export async function listRetests(db: Queryable, siteId: number) {
  const open = await selectRetests(db, and(eq(retests.siteId, siteId), isNull(retests.answer))).orderBy(
    asc(retests.askedAt),
    asc(retests.id),
  );
  const answered = await selectRetests(db, and(eq(retests.siteId, siteId), isNotNull(retests.answer)))
    .orderBy(desc(retests.answeredAt), desc(retests.id))
    .limit(mostAnswered);
  return [...open, ...answered];
}

/** Re-tests of these versions of a sample, oldest first. */
export async function listRetestsOf(db: Queryable, siteId: number, sampleIds: readonly number[]) {
  return selectRetests(
    db,
    and(eq(retests.siteId, siteId), inArray(retests.sampleId, [...sampleIds])),
  ).orderBy(asc(retests.askedAt), asc(retests.id));
}

export async function getRetest(db: Queryable, siteId: number, id: number) {
  const [row] = await selectRetests(db, and(eq(retests.siteId, siteId), eq(retests.id, id)));
  return row!;
}

const openOf = (siteId: number, sampleIds: readonly number[]) =>
  and(eq(retests.siteId, siteId), inArray(retests.sampleId, [...sampleIds]), isNull(retests.answer));

/** The open re-test of a sample, locked; at most one. */
export async function lockOpenRetest(tx: Queryable, siteId: number, sampleId: number) {
  const [row] = await tx
    .select()
    .from(retests)
    .where(openOf(siteId, [sampleId]))
    .for('update');
  return row ?? null;
}

export async function addRetest(tx: Queryable, row: typeof retests.$inferInsert): Promise<RetestRow> {
  const [made] = await tx.insert(retests).values(row).returning();
  return made!;
}

export async function setRetest(
  tx: Queryable,
  { siteId, id }: Pick<RetestRow, 'siteId' | 'id'>,
  values: Partial<typeof retests.$inferInsert>,
): Promise<void> {
  await tx
    .update(retests)
    .set(values)
    .where(and(eq(retests.siteId, siteId), eq(retests.id, id)));
}
