import { roles as allRoles, type Role } from '../../../shared/contracts/access.ts';
import { formatInstant, NO_VALUE } from '../../../shared/rules/format.ts';
import { rolesInWords } from './role-words.ts';

const instant = /^\d{4}-\d\d-\d\dT\d\d:\d\d:\d\d(\.\d+)?Z$/;

interface Around {
  zone: string;
  sites: readonly { id: number; name: string; archivedAt: string | null }[];
}

/** A value of an audit entry in words; what has parts comes as indented lines. */
export function valueWords(value: unknown, around: Around): string {
  if (value === null || value === undefined || value === '') return NO_VALUE;
  if (typeof value === 'boolean') return value ? 'yes' : 'no';
  if (typeof value === 'number') return String(value).replace('-', '−');
  if (typeof value === 'string') return instant.test(value) ? formatInstant(value, around.zone) : value;
  if (isRoles(value)) return rolesInWords({ administrator: false, roles: value }, around.sites);
  if (Array.isArray(value) && value.every((item) => typeof item !== 'object'))
    return value.join(', ') || NO_VALUE;
  return JSON.stringify(value, null, 2);
}

function isRoles(value: unknown): value is { siteId: number; role: Role }[] {
  return (
    Array.isArray(value) &&
    value.length > 0 &&
    value.every((item: unknown) => allRoles.includes((item as { role?: Role } | null)?.role as Role))
  );
}
