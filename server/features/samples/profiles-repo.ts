import { and, desc, eq, isNull, sql } from 'drizzle-orm';
import type { ProfileMapping } from '../../../shared/contracts/sample-profiles.ts';
import { type KnownProfile, namesIn } from '../../../shared/rules/import-profile.ts';
import type { Queryable } from '../../db/client.ts';
import { importProfiles, persons } from '../../db/schema/index.ts';

export type ProfileRow = typeof importProfiles.$inferSelect;

const inUse = (siteId: number) => and(eq(importProfiles.siteId, siteId), isNull(importProfiles.archivedAt));

/** Profiles in use at a site. */
export async function knownProfiles(db: Queryable, siteId: number): Promise<KnownProfile[]> {
  return db.select().from(importProfiles).where(inUse(siteId));
}

export async function findProfile(db: Queryable, siteId: number, id: number): Promise<ProfileRow | null> {
  const own = and(eq(importProfiles.siteId, siteId), eq(importProfiles.id, id));
  const [row] = await db.select().from(importProfiles).where(own);
  return row ?? null;
}

/** All profiles of a site, the last used first; with an id that one alone. */
export async function listProfiles(db: Queryable, siteId: number, id?: number) {
  const rows = await db
    .select({ profile: importProfiles, createdBy: persons.name })
    .from(importProfiles)
    .innerJoin(persons, eq(persons.id, importProfiles.createdBy))
    .where(and(eq(importProfiles.siteId, siteId), id === undefined ? undefined : eq(importProfiles.id, id)))
    .orderBy(desc(importProfiles.usedAt), desc(importProfiles.id));
  return rows.map(({ profile: { signature, mapping: _mapping, createdAt: _at, ...profile }, createdBy }) => ({
    ...profile,
    createdBy,
    columns: namesIn(signature),
  }));
}

/** Remembers how a file of a kind was read; one of the kind is read so from now on. */
export async function rememberProfile(
  tx: Queryable,
  made: { siteId: number; name: string; signature: string; mapping: ProfileMapping; by: number; at: Date },
): Promise<ProfileRow> {
  const { siteId, name, signature, mapping, by, at } = made;
  const [row] = await tx
    .insert(importProfiles)
    .values({ siteId, name, signature, mapping, usedAt: at, uses: 1, createdBy: by, createdAt: at })
    .onConflictDoUpdate({
      target: [importProfiles.siteId, importProfiles.signature],
      targetWhere: isNull(importProfiles.archivedAt),
      set: { mapping, usedAt: at, uses: sql`${importProfiles.uses} + 1` },
    })
    .returning();
  return row!;
}

export async function setProfile(
  tx: Queryable,
  { siteId, id }: Pick<ProfileRow, 'siteId' | 'id'>,
  set: Partial<ProfileRow>,
): Promise<ProfileRow> {
  const [row] = await tx
    .update(importProfiles)
    .set(set)
    .where(and(eq(importProfiles.siteId, siteId), eq(importProfiles.id, id)))
    .returning();
  return row!;
}

/** Is there another profile in use for files of the same kind? */
export async function sameKindInUse(tx: Queryable, row: ProfileRow): Promise<boolean> {
  const others = and(inUse(row.siteId), eq(importProfiles.signature, row.signature));
  return (await tx.$count(importProfiles, and(others, sql`${importProfiles.id} <> ${row.id}`))) > 0;
}
