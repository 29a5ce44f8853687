import { and, desc, eq, ne } from 'drizzle-orm';
import { completeMapping } from '../../../shared/rules/sample-mapping.ts';
import type { Queryable } from '../../db/client.ts';
import { persons, sampleImports } from '../../db/schema/index.ts';

export type ImportRow = typeof sampleImports.$inferSelect;

const mostListed = 500;

export async function listImports(db: Queryable, siteId: number, id?: number) {
  const rows = await db
    .select({
      id: sampleImports.id,
      siteId: sampleImports.siteId,
      fileName: sampleImports.fileName,
      state: sampleImports.state,
      mapping: sampleImports.mapping,
      counts: sampleImports.counts,
      version: sampleImports.version,
      createdBy: persons.name,
      createdAt: sampleImports.createdAt,
      committedAt: sampleImports.committedAt,
      undoneAt: sampleImports.undoneAt,
    })
    .from(sampleImports)
    .innerJoin(persons, eq(persons.id, sampleImports.createdBy))
    .where(and(eq(sampleImports.siteId, siteId), id === undefined ? undefined : eq(sampleImports.id, id)))
    .orderBy(desc(sampleImports.createdAt), desc(sampleImports.id))
    .limit(mostListed);
  return rows.map((row) => ({ ...row, mapping: row.mapping && completeMapping(row.mapping) }));
}

export async function getImportView(db: Queryable, siteId: number, id: number) {
  const [row] = await listImports(db, siteId, id);
  return row!;
}

export async function addImport(tx: Queryable, row: typeof sampleImports.$inferInsert): Promise<ImportRow> {
  const [made] = await tx.insert(sampleImports).values(row).returning();
  return made!;
}

export async function setImport(
  tx: Queryable,
  { siteId, id }: { siteId: number; id: number },
  values: Partial<typeof sampleImports.$inferInsert>,
): Promise<ImportRow> {
  const [row] = await tx
    .update(sampleImports)
    .set(values)
    .where(and(eq(sampleImports.siteId, siteId), eq(sampleImports.id, id)))
    .returning();
  return row!;
}

/** The same file, added at this site by another import and not taken out again. */
export async function findSameFile(
  db: Queryable,
  row: ImportRow,
): Promise<{ importId: number; at: Date } | null> {
  const [same] = await db
    .select({ importId: sampleImports.id, at: sampleImports.committedAt })
    .from(sampleImports)
    .where(
      and(
        eq(sampleImports.siteId, row.siteId),
        eq(sampleImports.sha256, row.sha256),
        eq(sampleImports.state, 'committed'),
        ne(sampleImports.id, row.id),
      ),
    )
    .orderBy(desc(sampleImports.committedAt))
    .limit(1);
  return same ? { importId: same.importId, at: same.at! } : null;
}
