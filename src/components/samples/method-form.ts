import type { LabMethod } from '../../../shared/contracts/samples.ts';
import { numberText, readNumber } from '../register/number-text.ts';

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

/** What can't be used as typed: field → sentence. */
export function checkMethod({ repeatability, reproducibility }: MethodFields): Record<string, string> {
  const typed = { repeatability: readNumber(repeatability), reproducibility: readNumber(reproducibility) };
  return Object.fromEntries(
    Object.entries(typed).flatMap(([field, read]) => ('wrong' in read ? [[field, read.wrong] as const] : [])),
  );
}

const numberOf = (text: string): number | null => {
  const read = readNumber(text);
  return 'wrong' in read ? null : read.value;
};

/** The method as it is sent; for fields that {@link checkMethod} finds nothing wrong with. */
export const methodBodyOf = ({ name, quantity, unit, repeatability, reproducibility }: MethodFields) => ({
  name,
  quantity,
  unit,
  repeatability: numberOf(repeatability),
  reproducibility: numberOf(reproducibility),
});
