import { sheetFields, type SheetFields } from '../../../shared/contracts/register.ts';

export type SheetField = keyof SheetFields;
const names = Object.keys(sheetFields.shape) as SheetField[];
const same = (a: unknown, b: unknown) => JSON.stringify(a) === JSON.stringify(b);

/** Fields in which two sheets differ. */
function changedFields(a: SheetFields, b: SheetFields): SheetField[] {
  return names.filter((name) => !same(a[name], b[name]));
}

/**
 * Two people edited the sheet that both began from `base`. What only one of them changed needs no question; `both` are
 * the fields that they changed to different values, for which `merged` holds mine until somebody chooses.
 */
export function mergeSheets(base: SheetFields, mine: SheetFields, theirs: SheetFields) {
  const changedByMe = new Set(changedFields(base, mine));
  const both = changedFields(base, theirs).filter(
    (name) => changedByMe.has(name) && !same(mine[name], theirs[name]),
  );
  const kept = Object.fromEntries([...changedByMe].map((name) => [name, mine[name]]));
  return { merged: { ...theirs, ...kept } as SheetFields, both };
}

/** The merged sheet after each disputed field was chosen. */
export function resolveSheets(
  merged: SheetFields,
  theirs: SheetFields,
  sides: Record<string, 'yours' | 'theirs'>,
): SheetFields {
  const taken = names.filter((name) => sides[name] === 'theirs').map((name) => [name, theirs[name]]);
  return { ...merged, ...Object.fromEntries(taken) } as SheetFields;
}
