import type { Context } from '../server/context.ts';
import { persons, siteRoles, sites } from '../server/db/schema/index.ts';
import { hashPassword } from '../server/auth/password.ts';
import type { SiteRow } from '../server/features/sites/repo.ts';
import { demoPassword, demoPeople, demoSites } from './company.ts';

/** Adds the demo company's sites and people; all share one published password. */
export async function seedPeople(context: Context): Promise<Map<string, SiteRow>> {
  const passwordHash = await hashPassword(demoPassword);
  return context.db.transaction(async (tx) => {
    const made = await tx
      .insert(sites)
      .values(demoSites.map((site) => ({ ...site })))
      .returning();
    const bySite = new Map(made.map((site) => [site.name, site]));
    for (const { name, email, administrator = false, roles } of demoPeople) {
      const [person] = await tx
        .insert(persons)
        .values({ name, email, administrator, passwordHash })
        .returning();
      const held = Object.entries(roles).flatMap(([site, list]) =>
        list.map((role) => ({ personId: person!.id, siteId: bySite.get(site)!.id, role })),
      );
      if (held.length > 0) await tx.insert(siteRoles).values(held);
    }
    return bySite;
  });
}
