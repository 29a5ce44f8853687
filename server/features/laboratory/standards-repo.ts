import { and, asc, desc, eq, inArray, isNull, ne, sql } from 'drizzle-orm';
import type { Queryable } from '../../db/client.ts';
import { checkResults, checkStandards, methods, persons, samples } from '../../db/schema/index.ts';

export type StandardRow = typeof checkStandards.$inferSelect;
export type ResultRow = typeof checkResults.$inferSelect;

const withRecorder = (db: Queryable) =>
  db
    .select({
      id: checkResults.id,
      standardId: checkResults.standardId,
      measuredAt: checkResults.measuredAt,
      analyst: checkResults.analyst,
      values: checkResults.values,
      recordedBy: persons.name,
      recordedAt: checkResults.recordedAt,
      withdrawnAt: checkResults.withdrawnAt,
      withdrawnReason: checkResults.withdrawnReason,
    })
    .from(checkResults)
    .innerJoin(persons, eq(persons.id, checkResults.recordedBy));

/** Check standards of a method with all their series, the newest first; or only one of them. */
export async function listStandards(db: Queryable, siteId: number, methodId: number, onlyId?: number) {
  const rows = await db
    .select({ standard: checkStandards, unit: methods.unit })
    .from(checkStandards)
    .innerJoin(
      methods,
      and(eq(methods.siteId, checkStandards.siteId), eq(methods.id, checkStandards.methodId)),
    )
    .where(
      and(
        eq(checkStandards.siteId, siteId),
        eq(checkStandards.methodId, methodId),
        onlyId === undefined ? undefined : eq(checkStandards.id, onlyId),
      ),
    )
    .orderBy(asc(checkStandards.name));
  const ids = rows.map(({ standard }) => standard.id);
  if (ids.length === 0) return [];
  const results = await withRecorder(db)
    .where(and(eq(checkResults.siteId, siteId), inArray(checkResults.standardId, ids)))
    .orderBy(desc(checkResults.measuredAt), desc(checkResults.id));
  return rows.map(({ standard, unit }) => ({
    ...standard,
    unit,
    results: results.filter(({ standardId }) => standardId === standard.id),
  }));
}

export async function getStandard(db: Queryable, { siteId, methodId, id }: StandardRow) {
  return (await listStandards(db, siteId, methodId, id))[0]!;
}

export async function getResult(db: Queryable, siteId: number, id: number) {
  const [row] = await withRecorder(db).where(and(eq(checkResults.siteId, siteId), eq(checkResults.id, id)));
  return row!;
}

/** The name of the check standard that a series was found on. */
export async function standardName(db: Queryable, { siteId, standardId }: ResultRow): Promise<string> {
  const [row] = await db
    .select({ name: checkStandards.name })
    .from(checkStandards)
    .where(and(eq(checkStandards.siteId, siteId), eq(checkStandards.id, standardId)));
  return row!.name;
}

/** Does another check standard of the method bear the name? */
export async function standardNameTaken(
  db: Queryable,
  { siteId, methodId }: Pick<StandardRow, 'siteId' | 'methodId'>,
  name: string,
  exceptId: number | null,
): Promise<boolean> {
  const count = await db.$count(
    checkStandards,
    and(
      eq(checkStandards.siteId, siteId),
      eq(checkStandards.methodId, methodId),
      sql`lower(${checkStandards.name}) = lower(${name})`,
      exceptId === null ? undefined : ne(checkStandards.id, exceptId),
    ),
  );
  return count > 0;
}

export async function insertStandard(
  tx: Queryable,
  row: typeof checkStandards.$inferInsert,
): Promise<StandardRow> {
  const [made] = await tx.insert(checkStandards).values(row).returning();
  return made!;
}

export async function setStandard(
  tx: Queryable,
  { siteId, id }: Pick<StandardRow, 'siteId' | 'id'>,
  values: Partial<typeof checkStandards.$inferInsert>,
): Promise<void> {
  await tx
    .update(checkStandards)
    .set(values)
    .where(and(eq(checkStandards.siteId, siteId), eq(checkStandards.id, id)));
}

export async function insertResult(tx: Queryable, row: typeof checkResults.$inferInsert): Promise<ResultRow> {
  const [made] = await tx.insert(checkResults).values(row).returning();
  return made!;
}

export async function setResultWithdrawn(
  tx: Queryable,
  { siteId, id }: Pick<ResultRow, 'siteId' | 'id'>,
  withdrawn: { withdrawnAt: Date; withdrawnReason: string },
): Promise<void> {
  await tx
    .update(checkResults)
    .set(withdrawn)
    .where(and(eq(checkResults.siteId, siteId), eq(checkResults.id, id)));
}

/** Single results of the samples that were found more than once by a method, of the last so many that stand. */
export async function replicatesOf(
  db: Queryable,
  siteId: number,
  methodId: number,
  atMost: number,
): Promise<number[][]> {
  const rows = await db
    .select({ replicates: samples.replicates })
    .from(samples)
    .where(
      and(
        eq(samples.siteId, siteId),
        eq(samples.methodId, methodId),
        isNull(samples.supersededAt),
        isNull(samples.withdrawnAt),
        isNull(samples.heldSince),
        sql`cardinality(${samples.replicates}) > 1`,
      ),
    )
    .orderBy(desc(samples.reportedAt), desc(samples.id))
    .limit(atMost);
  return rows.map(({ replicates }) => replicates!);
}
