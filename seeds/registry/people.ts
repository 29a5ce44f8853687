import { hashPassword } from '../../server/auth/password.ts';
import type { Context } from '../../server/context.ts';
import { persons, siteRoles, sites } from '../../server/db/schema/index.ts';
import type { SiteRow } from '../../server/http/rows.ts';
import { type DemoSite, demoPassword, demoPeople, demoSites } from '../company.ts';

/** Adds the demo company's sites and people; all share one published password. */
export async function addPeople(context: Context, since: Date): Promise<Map<DemoSite, SiteRow>> {
  const passwordHash = await hashPassword(demoPassword);
  return context.db.transaction(async (tx) => {
    const made = await tx
      .insert(sites)
      .values(demoSites.map(({ name, zone }) => ({ name, zone, createdAt: since })))
      .returning();
    const bySite = new Map(made.map((site) => [site.name as DemoSite, site as SiteRow]));
    for (const person of Object.values(demoPeople)) {
      const { name, email, roles } = person;
      const administrator = 'administrator' in person;
      const [added] = await tx
        .insert(persons)
        .values({ name, email, administrator, passwordHash, createdAt: since })
        .returning();
      const held = Object.entries(roles).flatMap(([site, list]) =>
        list.map((role) => ({ personId: added!.id, siteId: bySite.get(site as DemoSite)!.id, role })),
      );
      if (held.length > 0) await tx.insert(siteRoles).values(held);
    }
    return bySite;
  });
}
