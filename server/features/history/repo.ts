import { and, asc, count, desc, eq, ne, sql } from 'drizzle-orm';
import type { PgColumn } from 'drizzle-orm/pg-core';
import type { HistoryRefusalCode } from '../../../shared/contracts/history.ts';
import type { KnownTag } from '../../../shared/rules/history-proposal.ts';
import type { Queryable } from '../../db/client.ts';
import { historyImports, historyRefusals, persons, runs, tags } from '../../db/schema/index.ts';

export type ImportRow = typeof historyImports.$inferSelect;
/** A tag as an import sees it. */
export type ImportTag = KnownTag;

const columns = {
  id: historyImports.id,
  siteId: historyImports.siteId,
  fileName: historyImports.fileName,
  fileSize: historyImports.fileSize,
  state: historyImports.state,
  layout: historyImports.layout,
  replaceExisting: historyImports.replaceExisting,
  added: historyImports.added,
  unchanged: historyImports.unchanged,
  replaced: historyImports.replaced,
  keptDifferent: historyImports.keptDifferent,
  refused: historyImports.refused,
  firstAt: historyImports.firstAt,
  lastAt: historyImports.lastAt,
  runId: historyImports.runId,
  createdBy: persons.name,
  createdAt: historyImports.createdAt,
  finishedAt: historyImports.finishedAt,
};

export async function listImports(db: Queryable, siteId: number, id?: number) {
  return db
    .select(columns)
    .from(historyImports)
    .innerJoin(persons, eq(persons.id, historyImports.createdBy))
    .where(and(eq(historyImports.siteId, siteId), id === undefined ? undefined : eq(historyImports.id, id)))
    .orderBy(desc(historyImports.createdAt), desc(historyImports.id))
    .limit(500);
}

export async function getImportView(db: Queryable, siteId: number, id: number) {
  const [row] = await listImports(db, siteId, id);
  return row!;
}

const own = (siteId: number, id: number) => and(eq(historyImports.siteId, siteId), eq(historyImports.id, id));

export async function findImport(db: Queryable, siteId: number, id: number): Promise<ImportRow | null> {
  const [row] = await db.select().from(historyImports).where(own(siteId, id));
  return row ?? null;
}

export async function lockImport(db: Queryable, siteId: number, id: number): Promise<ImportRow> {
  const [row] = await db.select().from(historyImports).where(own(siteId, id)).for('update');
  return row!;
}

export async function addImport(db: Queryable, row: typeof historyImports.$inferInsert): Promise<ImportRow> {
  const [made] = await db.insert(historyImports).values(row).returning();
  return made!;
}

export async function setImport(
  db: Queryable,
  { siteId, id }: { siteId: number; id: number },
  values: Partial<typeof historyImports.$inferInsert>,
): Promise<void> {
  await db.update(historyImports).set(values).where(own(siteId, id));
}

/** Counts of one chunk, added to those of the import in the transaction that stored the chunk. */
export interface ChunkCounts {
  lineDone: number;
  added: number;
  unchanged: number;
  replaced: number;
  keptDifferent: number;
  refused: number;
  first: Date | null;
  last: Date | null;
}

export async function addCounts(
  db: Queryable,
  key: { siteId: number; id: number },
  chunk: ChunkCounts,
): Promise<void> {
  const more = (column: PgColumn, by: number) => sql`${column} + ${by}`;
  await db
    .update(historyImports)
    .set({
      lineDone: chunk.lineDone,
      added: more(historyImports.added, chunk.added),
      unchanged: more(historyImports.unchanged, chunk.unchanged),
      replaced: more(historyImports.replaced, chunk.replaced),
      keptDifferent: more(historyImports.keptDifferent, chunk.keptDifferent),
      refused: more(historyImports.refused, chunk.refused),
      firstAt: sql`least(${historyImports.firstAt}, ${chunk.first?.toISOString() ?? null}::timestamptz)`,
      lastAt: sql`greatest(${historyImports.lastAt}, ${chunk.last?.toISOString() ?? null}::timestamptz)`,
    })
    .where(own(key.siteId, key.id));
}

/** How a run of this site stands. */
export async function findRunEnd(db: Queryable, siteId: number, runId: number) {
  const [run] = await db
    .select({ state: runs.state, finishedAt: runs.finishedAt })
    .from(runs)
    .where(and(eq(runs.siteId, siteId), eq(runs.id, runId)));
  return run ?? null;
}

/** The same file, imported to its end at this site before. */
export async function findSameFile(
  db: Queryable,
  row: { siteId: number; id: number; sha256: string },
): Promise<{ importId: number; at: Date } | null> {
  const [same] = await db
    .select({ importId: historyImports.id, at: historyImports.finishedAt })
    .from(historyImports)
    .where(
      and(
        eq(historyImports.siteId, row.siteId),
        eq(historyImports.sha256, row.sha256),
        eq(historyImports.state, 'done'),
        ne(historyImports.id, row.id),
      ),
    )
    .orderBy(desc(historyImports.finishedAt))
    .limit(1);
  return same?.at ? { importId: same.importId, at: same.at } : null;
}

/** The site's tags; those whose readings Cupel works out itself are marked: shadows, and estimates of a regression in force. */
export async function listImportTags(db: Queryable, siteId: number): Promise<ImportTag[]> {
  const computed = sql<boolean>`tags.kind = 'shadow' or exists (
    select 1 from soft_sensors s
    where s.site_id = tags.site_id and s.estimate_tag_id = tags.id and (
      select r.model ->> 'form' from revisions r
      where r.site_id = s.site_id and r.soft_sensor_id = s.id and r.decision = 'approved'
      order by r.effective_from desc limit 1
    ) = 'regression')`;
  return db.select({ id: tags.id, name: tags.name, computed }).from(tags).where(eq(tags.siteId, siteId));
}

export async function addRefusals(
  db: Queryable,
  key: { siteId: number; importId: number },
  rows: readonly { line: number; column: number; code: HistoryRefusalCode; found: string }[],
): Promise<void> {
  if (rows.length === 0) return;
  await db
    .insert(historyRefusals)
    .values(
      rows.map(({ line, column, code, found }) => ({ ...key, line, column, code, found: shownText(found) })),
    )
    .onConflictDoNothing();
}

/** PostgreSQL's text holds no zero character. */
const shownText = (found: string): string => found.replaceAll('\0', '').slice(0, 200);

const ofImport = (siteId: number, importId: number) =>
  and(eq(historyRefusals.siteId, siteId), eq(historyRefusals.importId, importId));

export async function countRefusals(db: Queryable, siteId: number, importId: number): Promise<number> {
  const [row] = await db.select({ count: count() }).from(historyRefusals).where(ofImport(siteId, importId));
  return row!.count;
}

export async function listRefusals(db: Queryable, siteId: number, importId: number) {
  const rows = await db
    .select({
      line: historyRefusals.line,
      column: historyRefusals.column,
      code: historyRefusals.code,
      found: historyRefusals.found,
    })
    .from(historyRefusals)
    .where(ofImport(siteId, importId))
    .orderBy(asc(historyRefusals.line), asc(historyRefusals.column));
  return rows.map((row) => ({ ...row, code: row.code as HistoryRefusalCode }));
}
