import type { Role } from '../../../shared/contracts/access.ts';
import { roles } from '../../../shared/contracts/access.ts';
import type { Person } from '../../../shared/contracts/people.ts';
import type { Site } from '../../../shared/contracts/sites.ts';
import { plural } from '../../../shared/rules/format.ts';

export const roleNames: Record<Role, string> = {
  engineer: 'process engineer',
  technician: 'laboratory technician',
  manager: 'plant manager',
  reader: 'reader',
};
export const roleHeads: Record<Role, string> = {
  engineer: 'Engineer',
  technician: 'Technician',
  manager: 'Manager',
  reader: 'Reader',
};

/** "Process engineer at Tarnby Works, Ostrander Mill; plant manager at Kallara Refinery". */
export function rolesInWords(
  person: Pick<Person, 'administrator' | 'roles'>,
  sites: readonly Pick<Site, 'id' | 'name' | 'archivedAt'>[],
): string {
  const open = sites.filter((site) => site.archivedAt === null);
  const said = roles.flatMap((role) => {
    const held = person.roles.filter((one) => one.role === role).map(({ siteId }) => siteId);
    if (held.length === 0) return [];
    const every = open.length > 1 && open.every(({ id }) => held.includes(id));
    const names = sites.filter(({ id }) => held.includes(id)).map(({ name }) => name);
    return [`${roleNames[role]} at ${every ? 'every site' : names.join(', ')}`];
  });
  const all = [...(person.administrator ? ['administrator of the company'] : []), ...said];
  const words = all.length === 0 ? 'no role yet' : all.join('; ');
  return words[0]!.toUpperCase() + words.slice(1);
}

/** The finding of the list of people: "14 people, 2 without a password yet." */
export function peopleHeadline(people: readonly Pick<Person, 'hasPassword' | 'deactivatedAt'>[]): string {
  const active = people.filter(({ deactivatedAt }) => deactivatedAt === null);
  const without = active.filter(({ hasPassword }) => !hasPassword).length;
  const count = plural(active.length, 'person', 'people');
  return without === 0 ? `${count}, all with a password.` : `${count}, ${without} without a password yet.`;
}
