import { and, asc, eq, gt, inArray, isNull, sql } from 'drizzle-orm';
import type { Role } from '../../../shared/contracts/access.ts';
import type { Queryable } from '../../db/client.ts';
import { oneTimeLinks, persons, sessions, siteRoles, sites } from '../../db/schema/index.ts';
import type { Actor } from '../../http/request.ts';

export type PersonRow = typeof persons.$inferSelect;
export type LinkPurpose = 'set-password' | 'reset-password' | 'first-administrator';

const rolesOf = sql<{ siteId: number; role: Role }[]>`coalesce(
  (select json_agg(json_build_object('siteId', r.site_id, 'role', r.role) order by r.site_id, r.role)
   from site_roles r join sites s on s.id = r.site_id and s.archived_at is null where r.person_id = persons.id), '[]')`;

/** The person behind a session, with roles at sites that are not archived; null once deactivated. */
export async function findActor(db: Queryable, personId: number): Promise<Actor | null> {
  const [row] = await db
    .select({
      id: persons.id,
      name: persons.name,
      email: persons.email,
      administrator: persons.administrator,
      roles: rolesOf,
    })
    .from(persons)
    .where(and(eq(persons.id, personId), isNull(persons.deactivatedAt)));
  return row ?? null;
}

export async function findPersonByEmail(db: Queryable, email: string): Promise<PersonRow | null> {
  const [row] = await db
    .select()
    .from(persons)
    .where(sql`lower(${persons.email}) = lower(${email})`);
  return row ?? null;
}

export async function findPerson(db: Queryable, id: number): Promise<PersonRow | null> {
  const [row] = await db.select().from(persons).where(eq(persons.id, id));
  return row ?? null;
}

export async function addPerson(db: Queryable, row: typeof persons.$inferInsert): Promise<PersonRow> {
  const [person] = await db.insert(persons).values(row).returning();
  return person!;
}

export async function setPassword(db: Queryable, personId: number, passwordHash: string): Promise<void> {
  await db.update(persons).set({ passwordHash }).where(eq(persons.id, personId));
}

export async function anyAdministrator(db: Queryable): Promise<boolean> {
  const [row] = await db
    .select({ id: persons.id })
    .from(persons)
    .where(and(eq(persons.administrator, true), isNull(persons.deactivatedAt)))
    .limit(1);
  return row !== undefined;
}

export async function addLink(db: Queryable, row: typeof oneTimeLinks.$inferInsert): Promise<void> {
  await db.insert(oneTimeLinks).values(row);
}

/** A link that still works, locked so that two uses at once can't both succeed. */
export async function findLink(db: Queryable, tokenHash: string, now: Date, lock: boolean) {
  const query = db
    .select()
    .from(oneTimeLinks)
    .where(
      and(
        eq(oneTimeLinks.tokenHash, tokenHash),
        isNull(oneTimeLinks.usedAt),
        gt(oneTimeLinks.expiresAt, now),
      ),
    );
  const [link] = lock ? await query.for('update') : await query;
  return link ?? null;
}

export async function useUpLinks(db: Queryable, personId: number | null, now: Date): Promise<void> {
  const whose = personId === null ? isNull(oneTimeLinks.personId) : eq(oneTimeLinks.personId, personId);
  await db
    .update(oneTimeLinks)
    .set({ usedAt: now })
    .where(and(whose, isNull(oneTimeLinks.usedAt)));
}

export async function listPeople(db: Queryable) {
  return db
    .select({
      id: persons.id,
      name: persons.name,
      email: persons.email,
      administrator: persons.administrator,
      roles: rolesOf,
      hasPassword: sql<boolean>`${persons.passwordHash} is not null`,
      deactivatedAt: persons.deactivatedAt,
      version: persons.version,
    })
    .from(persons)
    .orderBy(asc(persons.name));
}

export async function listPeopleAtSite(db: Queryable, siteId: number) {
  return db
    .select({
      id: persons.id,
      name: persons.name,
      roles: sql<Role[]>`json_agg(${siteRoles.role} order by ${siteRoles.role})`,
    })
    .from(persons)
    .innerJoin(siteRoles, eq(siteRoles.personId, persons.id))
    .where(and(eq(siteRoles.siteId, siteId), isNull(persons.deactivatedAt)))
    .groupBy(persons.id)
    .orderBy(asc(persons.name));
}

/** Gives a person these roles instead of those held at open sites; what was held at an archived site stays. */
export async function replaceRoles(
  db: Queryable,
  personId: number,
  roles: readonly { siteId: number; role: Role }[],
): Promise<void> {
  const open = db.select({ id: sites.id }).from(sites).where(isNull(sites.archivedAt));
  await db.delete(siteRoles).where(and(eq(siteRoles.personId, personId), inArray(siteRoles.siteId, open)));
  if (roles.length > 0) {
    await db
      .insert(siteRoles)
      .values(roles.map((held) => ({ personId, ...held })))
      .onConflictDoNothing();
  }
}

/** Sites at which a role can be given. */
export async function openSiteIds(db: Queryable): Promise<Set<number>> {
  const rows = await db.select({ id: sites.id }).from(sites).where(isNull(sites.archivedAt));
  return new Set(rows.map((row) => row.id));
}

export async function endSessions(db: Queryable, personId: number): Promise<void> {
  await db.delete(sessions).where(eq(sessions.userId, personId));
}

export async function namesOf(db: Queryable, ids: readonly number[]): Promise<Map<number, string>> {
  if (ids.length === 0) return new Map();
  const rows = await db
    .select({ id: persons.id, name: persons.name })
    .from(persons)
    .where(inArray(persons.id, [...ids]));
  return new Map(rows.map((row) => [row.id, row.name]));
}
