import { and, asc, eq } from 'drizzle-orm';
import type { UnknownPoint } from '../../../shared/contracts/standing-samples.ts';
import type { Queryable } from '../../db/client.ts';
import { sampleImports } from '../../db/schema/index.ts';
import { listSamplePoints } from '../samples/points-repo.ts';

/** Names of sample points that added files bring and that were not known then, those of most rows first. */
export async function listUnknownPoints(db: Queryable, siteId: number): Promise<UnknownPoint[]> {
  const files = await db
    .select({
      importId: sampleImports.id,
      fileName: sampleImports.fileName,
      unknown: sampleImports.unknownPoints,
    })
    .from(sampleImports)
    .where(and(eq(sampleImports.siteId, siteId), eq(sampleImports.state, 'committed')))
    .orderBy(asc(sampleImports.id));
  const known = await namesInUse(db, siteId);
  const found = new Map<string, UnknownPoint>();
  for (const { importId, fileName, unknown } of files) {
    for (const [name, rows] of Object.entries(unknown)) {
      const key = name.toLowerCase();
      const one = found.get(key) ?? { name, rows: 0, files: [], isNow: known.get(key) ?? null };
      one.rows += rows;
      one.files.push({ importId, fileName, rows });
      found.set(key, one);
    }
  }
  return [...found.values()].sort((a, b) => b.rows - a.rows || a.name.localeCompare(b.name));
}

async function namesInUse(db: Queryable, siteId: number): Promise<Map<string, { id: number; name: string }>> {
  const points = (await listSamplePoints(db, siteId)).filter(({ archivedAt }) => archivedAt === null);
  return new Map(
    points.flatMap(({ id, name, aliases }) =>
      [name, ...aliases].map((known) => [known.toLowerCase(), { id, name }] as const),
    ),
  );
}
