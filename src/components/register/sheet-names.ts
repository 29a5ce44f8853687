import type { Sheet } from '../../../shared/contracts/register.ts';
import type { NamesOf } from './sheet-words.ts';

interface Named {
  id: number;
  name: string;
}

/** Names for the ids on a sheet: from the sheet itself, else from lists of its site. */
export function sheetNames(
  sheet: Sheet,
  lists: Partial<Record<Parameters<NamesOf>[0], readonly Named[]>> = {},
): NamesOf {
  const { fields } = sheet;
  const own: Record<Parameters<NamesOf>[0], (Named | null)[]> = {
    unitId: [{ id: fields.unitId, name: sheet.unitName }],
    samplePointId: [named(fields.samplePointId, sheet.samplePointName)],
    methodId: [named(fields.methodId, sheet.methodName)],
    person: [sheet.owner, sheet.deputy, sheet.approver],
  };
  return (field, id) =>
    [...own[field], ...(lists[field] ?? [])].find((found) => found?.id === id)?.name ?? `number ${id}`;
}

const named = (id: number | null, name: string | null): Named | null =>
  id === null || name === null ? null : { id, name };
