import type { Role } from '../../../shared/contracts/access.ts';
import type { Choice } from './ChoiceField.vue';

export type PersonField = 'ownerId' | 'deputyId' | 'approverId';
interface PersonAtSite {
  id: number;
  name: string;
  roles: readonly Role[];
}

const roleNames: Record<Role, string> = {
  engineer: 'process engineer',
  technician: 'laboratory',
  manager: 'plant manager',
  reader: 'reader',
};
/** Roles that can fill each part; the server asks the same. */
const fitting: Record<PersonField, readonly Role[]> = {
  ownerId: ['engineer'],
  deputyId: ['engineer'],
  approverId: ['engineer', 'manager'],
};
const calls: Record<PersonField, string> = {
  ownerId: 'owner must be a process engineer',
  deputyId: 'deputy must be a process engineer',
  approverId: 'approver must be a process engineer or plant manager',
};
const fits = (field: PersonField, { roles }: PersonAtSite) =>
  roles.some((role) => fitting[field].includes(role));

/** People of the site who can fill a part, and whoever is named for it now, known by name even without a role. */
export function peopleChoices(
  field: PersonField,
  people: readonly PersonAtSite[],
  known: readonly { id: number; name: string }[],
  named: number | null,
): Choice<number>[] {
  const choices = people
    .filter((person) => fits(field, person) || person.id === named)
    .map(({ id, name, roles }) => ({
      value: id,
      label: name,
      note: roles.map((role) => roleNames[role]).join(', '),
    }));
  const gone = known.find(({ id }) => id === named && !people.some((person) => person.id === id));
  return gone
    ? [...choices, { value: gone.id, label: gone.name, note: 'no role at the site any more' }]
    : choices;
}

/** Why the person named can't fill the part, or null where they can or nobody is named. */
export function mayBe(
  field: PersonField,
  people: readonly PersonAtSite[],
  named: number | null,
): string | null {
  if (named === null) return null;
  const person = people.find(({ id }) => id === named);
  return person && fits(field, person) ? null : `The ${calls[field]} of the site. Choose somebody who is.`;
}
