import { roles as allRoles, type Role } from '../../../shared/contracts/access.ts';
import { formatInstant, formatNumber, NO_VALUE } from '../../../shared/rules/format.ts';
import { sayDuration } from '../register/durations.ts';
import { fieldLabel } from './audit-words.ts';
import { rolesInWords } from './role-words.ts';

const instant = /^\d{4}-\d\d-\d\dT\d\d:\d\d:\d\d(\.\d+)?Z$/;

interface Around {
  zone: string;
  sites: readonly { id: number; name: string; archivedAt: string | null }[];
}

/** A value of an audit entry in words; what has parts takes a line for each. */
export function valueWords(field: string, value: unknown, around: Around): string {
  if (value === null || value === undefined || value === '') return NO_VALUE;
  if (typeof value === 'boolean') return value ? 'yes' : 'no';
  if (typeof value === 'number') return field.endsWith('Ms') ? sayDuration(value) : numberWords(value);
  if (typeof value === 'string') return instant.test(value) ? formatInstant(value, around.zone) : value;
  if (isRoles(value)) return rolesInWords({ administrator: false, roles: value }, around.sites);
  if (Array.isArray(value)) return listWords(field, value, around);
  return partsWords(value, around, '\n');
}

function numberWords(value: number): string {
  if (Number.isInteger(value)) return formatNumber(value);
  return String(Number(value.toPrecision(6))).replace('-', '−');
}

function listWords(field: string, items: unknown[], around: Around): string {
  if (items.length === 0) return NO_VALUE;
  const parts = items.every((item) => typeof item === 'object' && item !== null);
  return parts
    ? items.map((item) => partsWords(item as object, around, ', ')).join('\n')
    : items.map((item) => valueWords(field, item, around)).join(', ');
}

const partsWords = (parts: object, around: Around, between: string): string =>
  Object.entries(parts)
    .map(([name, part]) => `${fieldLabel(name).toLowerCase()} ${valueWords(name, part, around)}`)
    .join(between);

function isRoles(value: unknown): value is { siteId: number; role: Role }[] {
  return (
    Array.isArray(value) &&
    value.length > 0 &&
    value.every((item: unknown) => allRoles.includes((item as { role?: Role } | null)?.role as Role))
  );
}
