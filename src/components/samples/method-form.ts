import type { LabMethod } from '../../../shared/contracts/samples.ts';
import { sayNarrow } from '../../../shared/rules/precision-sentences.ts';
import { readTypedNumber } from '../../../shared/rules/typed-result.ts';
import { numberText } from '../register/number-text.ts';

/** A laboratory method as typed. */
export interface MethodFields {
  name: string;
  quantity: string;
  unit: string;
  repeatability: string;
  reproducibility: string;
  archived: boolean;
}

export const blankMethod: MethodFields = {
  name: '',
  quantity: '',
  unit: '',
  repeatability: '',
  reproducibility: '',
  archived: false,
};

export const methodFieldsOf = (row: LabMethod): MethodFields => ({
  name: row.name,
  quantity: row.quantity,
  unit: row.unit,
  repeatability: numberText(row.repeatability),
  reproducibility: numberText(row.reproducibility),
  archived: row.archivedAt !== null,
});

/** A limit as typed, with a decimal comma or point; blank is null. */
const read = (text: string): { ok: true; value: number | null } | { ok: false; message: string } =>
  text.trim() === '' ? { ok: true, value: null } : readTypedNumber(text);

/** What can't be used as typed: field → sentence. */
export function checkMethod({ repeatability, reproducibility }: MethodFields): Record<string, string> {
  const r = read(repeatability);
  const R = read(reproducibility);
  const errors: Record<string, string> = {};
  if (!r.ok) errors.repeatability = r.message;
  if (!R.ok) errors.reproducibility = R.message;
  if (r.ok && R.ok && r.value !== null && R.value !== null && r.value > R.value) {
    errors.reproducibility = sayNarrow(r.value, R.value);
  }
  return errors;
}

const numberOf = (text: string): number | null => {
  const found = read(text);
  return found.ok ? found.value : null;
};

/** The method as it is sent; for fields that {@link checkMethod} finds nothing wrong with. */
export const methodBodyOf = ({ name, quantity, unit, repeatability, reproducibility }: MethodFields) => ({
  name,
  quantity,
  unit,
  repeatability: numberOf(repeatability),
  reproducibility: numberOf(reproducibility),
});
