import { and, desc, eq, ilike, inArray, or } from 'drizzle-orm';
import type { Queryable } from '../../db/client.ts';
import { auditEntries, sites } from '../../db/schema/index.ts';

interface AuditFilter {
  page: number;
  perPage: number;
  siteId?: number;
  entity?: string;
  entityId?: string;
  text?: string;
}

/** Entries of the given sites; only who reads every site sees those of the company itself. */
export async function listAudit(db: Queryable, siteIds: number[] | 'every', filter: AuditFilter) {
  const text = filter.text ? `%${filter.text.replace(/[\\%_]/g, '\\$&')}%` : undefined;
  const where = and(
    siteIds === 'every' ? undefined : inArray(auditEntries.siteId, siteIds.length > 0 ? siteIds : [0]),
    filter.siteId === undefined ? undefined : eq(auditEntries.siteId, filter.siteId),
    filter.entity === undefined ? undefined : eq(auditEntries.entity, filter.entity),
    filter.entityId === undefined ? undefined : eq(auditEntries.entityId, filter.entityId),
    text === undefined
      ? undefined
      : or(ilike(auditEntries.entityName, text), ilike(auditEntries.personName, text)),
  );
  const rows = await db
    .select({
      id: auditEntries.id,
      at: auditEntries.at,
      siteId: auditEntries.siteId,
      siteName: sites.name,
      personName: auditEntries.personName,
      fromAddress: auditEntries.fromAddress,
      action: auditEntries.action,
      entity: auditEntries.entity,
      entityId: auditEntries.entityId,
      entityName: auditEntries.entityName,
      before: auditEntries.before,
      after: auditEntries.after,
      reason: auditEntries.reason,
      requestId: auditEntries.requestId,
    })
    .from(auditEntries)
    .leftJoin(sites, eq(sites.id, auditEntries.siteId))
    .where(where)
    .orderBy(desc(auditEntries.at), desc(auditEntries.id))
    .limit(filter.perPage)
    .offset((filter.page - 1) * filter.perPage);
  return { rows, total: await db.$count(auditEntries, where) };
}

export async function findLastEntry(db: Queryable, entity: string, entityId: string) {
  const [entry] = await db
    .select({ personName: auditEntries.personName, at: auditEntries.at })
    .from(auditEntries)
    .where(and(eq(auditEntries.entity, entity), eq(auditEntries.entityId, entityId)))
    .orderBy(desc(auditEntries.id))
    .limit(1);
  return entry ?? null;
}
