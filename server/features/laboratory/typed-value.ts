import type { FieldProblem } from '../../../shared/contracts/errors.ts';
import { unitKey } from '../../../shared/rules/sample-registry.ts';
import { readTypedResult } from '../../../shared/rules/typed-result.ts';
import { convertValue } from '../../../shared/rules/unit-convert.ts';
import type { SampleRow } from './repo.ts';
import type { Anew } from './versions.ts';

/**
 * A result as typed, in the unit of the sample that it is about; converted where another unit of the kind was stated,
 * refused for any other unit.
 */
export function typedValue(
  { unit }: SampleRow,
  text: string,
  stated: string | undefined,
): { ok: true; anew: Anew } | { ok: false; fields: FieldProblem[] } {
  const read = readTypedResult(text);
  if (!read.ok) return { ok: false, fields: [{ path: 'value', message: read.message }] };
  const { value, qualifier } = read;
  // The single results of before are not those of the new value.
  const anew = { qualifier, asWritten: text.trim(), replicates: null };
  if (stated === undefined || unitKey(stated) === unitKey(unit)) {
    return { ok: true, anew: { ...anew, value, statedUnit: null, statedValue: null } };
  }
  const converted = convertValue(value, stated, unit);
  if (!converted.ok) {
    const message = `${stated || 'A pure number'} can’t be converted to ${unit || 'a pure number'}. Write the value in ${unit || 'no unit'}.`;
    return { ok: false, fields: [{ path: 'unit', message }] };
  }
  return { ok: true, anew: { ...anew, value: converted.value, statedUnit: stated, statedValue: value } };
}
