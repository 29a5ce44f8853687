import type { SampleDraft } from './sample-row.ts';
import { unitKey } from './sample-registry.ts';
import type { Note } from './sample-taken.ts';
import { convertValue, type NoConversion } from './unit-convert.ts';

/** A result in the unit of the site, with what the laboratory stated where that differs. */
export type InUnit = Pick<SampleDraft, 'value' | 'unit' | 'statedUnit' | 'statedValue'>;

/**
 * Brings a result into the unit of the site: in its spelling where the two are one, converted where the stated unit
 * differs but is of the kind, and refused where it is not. Nothing is converted that the file does not state.
 * @param stated unit as the file has it
 * @param expected units that samples of the point may have; empty: any is taken
 * @param value null where no number could be read
 */
export function inUnitOf(
  value: number | null,
  stated: string,
  expected: readonly string[],
  note: Note,
): InUnit | null {
  const plain = { statedUnit: null, statedValue: null };
  if (expected.length === 0) return value === null ? null : { value, unit: stated, ...plain };
  const known =
    expected.find((unit) => unit === stated) ?? expected.find((unit) => unitKey(unit) === unitKey(stated));
  if (known !== undefined) return value === null ? null : { value, unit: known, ...plain };
  const wanted = expected.join(' or ');
  if (stated === '') {
    note('no-unit', { expected: wanted });
    return null;
  }
  let why: NoConversion = 'unknown';
  for (const unit of expected) {
    const converted = convertValue(value ?? 0, stated, unit);
    if (!converted.ok) {
      why = converted.why;
      continue;
    }
    if (value === null) return null;
    note('converted', { from: value, fromUnit: stated, to: converted.value, toUnit: unit });
    return { value: converted.value, unit, statedUnit: stated, statedValue: value };
  }
  note('other-unit', { unit: stated.slice(0, 40), expected: wanted, why });
  return null;
}
