import type { AuditEntry } from '../../../shared/contracts/audit.ts';
import { sheetFields, type SheetFields } from '../../../shared/contracts/register.ts';
import { fieldLabels, lifeWords, sayField, type NamesOf } from './sheet-words.ts';

export interface ChangedField {
  label: string;
  before: string | null;
  after: string;
}

const isLife = (value: unknown): value is keyof typeof lifeWords =>
  typeof value === 'string' && value in lifeWords;

/** What an audit entry of a data sheet changed, field by field in words; empty where it tells of no field. */
export function changedInWords(entry: AuditEntry, nameOf: NamesOf): ChangedField[] {
  const { before, after } = entry;
  if (isLife(after?.life)) {
    return [
      {
        label: 'Life',
        before: isLife(before?.life) ? lifeWords[before.life] : null,
        after: lifeWords[after.life],
      },
    ];
  }
  const [old, next] = [sheetFields.safeParse(before), sheetFields.safeParse(after)];
  if (!next.success || !old.success) return [];
  return (Object.keys(fieldLabels) as (keyof SheetFields)[])
    .filter((field) => JSON.stringify(old.data[field]) !== JSON.stringify(next.data[field]))
    .map((field) => ({
      label: fieldLabels[field],
      before: sayField(field, old.data, nameOf),
      after: sayField(field, next.data, nameOf),
    }));
}

/** "registered it", "changed the draft", "approved revision 4". */
export function deedOf(entry: AuditEntry): string {
  const { action, after } = entry;
  const part = entry.entityName.split(', ').at(-1);
  if (after?.life === 'suspended') return 'suspended it';
  if (after?.life === 'in-service') return 'put it back in service';
  if (part === 'revision') {
    const deed = action === 'propose' ? 'proposed' : String(after?.decision ?? 'changed');
    return `${deed} revision ${String(after?.number ?? '')}`.trim();
  }
  if (part === 'draft') return action === 'add' ? 'began a draft' : 'changed the draft';
  if (part === 'fit') return 'fitted the draft';
  return action === 'add' ? 'registered it' : 'changed the data sheet';
}
