import type { AuditEntry } from '../../../shared/contracts/audit.ts';

const verbs: Record<string, string> = {
  add: 'added',
  change: 'changed',
  archive: 'archived',
  'take-back': 'took back',
  remove: 'removed',
  commit: 'committed',
  undo: 'undid',
  propose: 'proposed',
  decide: 'decided on',
  start: 'started',
  cancel: 'stopped',
};

const things: Record<string, string> = {
  softSensor: 'soft sensor',
  'sample-point': 'sample point',
  'sample-import': 'sample file',
  'import-profile': 'kind of sample file',
  'history-import': 'history file',
  're-test': 're-test of',
  'check-result': 'results on',
  'sample-request': 'request for samples of',
  'sample-not-taken': 'reason for no sample at',
};
/** Verbs of what a thing has of its own. */
const ownVerbs: Record<string, Record<string, string>> = {
  sample: { decide: 'released', remove: 'withdrew' },
  're-test': { add: 'asked for', decide: 'answered' },
  'check-result': { remove: 'withdrew' },
  'sample-request': { add: 'made', cancel: 'withdrew' },
  'sample-not-taken': { add: 'gave' },
};
const thingWord = (entity: string): string => things[entity] ?? entity.replaceAll('-', ' ');

/** What was done, without who: "archived the area Hot end", "mailed a password link to Tove Halbrook". */
export function deedWords(entry: AuditEntry): string {
  const { action, entity, entityName, before, after } = entry;
  switch (action) {
    case 'sign-in':
      return 'signed in';
    case 'sign-out':
      return 'signed out';
    case 'set-password':
      return 'set a password';
    case 'ask-for-link':
      return `asked for a password link for ${entityName}`;
  }
  if (entity === 'password link') return `mailed a password link to ${entityName}`;
  if (entity === 'readings') return `removed readings of ${entityName}`;
  const verb = archiveVerb(before, after) ?? ownVerbs[entity]?.[action] ?? verbs[action] ?? action;
  // A part of a soft sensor is recorded under the sensor: "AY-3310, draft".
  const part = entity === 'softSensor' ? /^(.+), ([a-z ]+)$/.exec(entityName) : null;
  return part ? `${verb} the ${part[2]} of ${part[1]}` : `${verb} the ${thingWord(entity)} ${entityName}`;
}

/** A change that only set or cleared the moment of archiving has a word of its own. */
function archiveVerb(before: AuditEntry['before'], after: AuditEntry['after']): string | null {
  if (!before || !after) return null;
  for (const [field, gone, back] of [
    ['archivedAt', 'archived', 'took back'],
    ['deactivatedAt', 'deactivated', 'took back'],
  ] as const) {
    if (!(field in before) || (before[field] === null) === (after[field] === null)) continue;
    return after[field] === null ? back : gone;
  }
  return null;
}

export interface FieldChange {
  field: string;
  label: string;
  before: unknown;
  after: unknown;
  changed: boolean;
}

const labels: Record<string, string> = {
  email: 'E-mail address',
  areaId: 'Area number',
  tagId: 'Tag number',
  unitId: 'Unit number',
  tagName: 'Tag',
  archivedAt: 'Archived',
  deactivatedAt: 'Deactivated',
  hasPassword: 'Password set',
  importanceClass: 'Class',
};
const hidden = new Set(['id', 'siteId', 'version']);

/** Field by field, what differs first; what only numbers the row, or is blank on the one side there is, is left out. */
export function fieldChanges({ before, after }: Pick<AuditEntry, 'before' | 'after'>): FieldChange[] {
  const names = [...new Set([...Object.keys(before ?? {}), ...Object.keys(after ?? {})])];
  const both = before !== null && after !== null;
  const says = (value: unknown) => value !== null && value !== undefined && value !== '';
  const rows = names
    .filter((field) => !hidden.has(field) && (both || says((before ?? after)?.[field])))
    .map((field) => ({
      field,
      label: fieldLabel(field),
      before: before?.[field],
      after: after?.[field],
      changed: JSON.stringify(before?.[field]) !== JSON.stringify(after?.[field]),
    }));
  return [...rows.filter(({ changed }) => changed), ...rows.filter(({ changed }) => !changed)];
}

/** "rangeLow" → "Range low"; the unit of a duration stands in its value. */
export function fieldLabel(field: string): string {
  if (labels[field]) return labels[field];
  const words = field
    .replace(/Ms$/, '')
    .replace(/([a-z])([A-Z])/g, '$1 $2')
    .toLowerCase();
  return words[0]!.toUpperCase() + words.slice(1);
}
