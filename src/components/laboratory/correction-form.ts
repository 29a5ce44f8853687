import type { SampleCorrection } from '../../../shared/contracts/laboratory.ts';
import type { SampleVersion } from '../../../shared/contracts/standing-samples.ts';
import { readTypedResult } from '../../../shared/rules/typed-result.ts';
import { momentAt, readMoment, type TypedMoment } from '../events/event-form.ts';

/** A correction of a sample as it is typed. */
export interface CorrectionFields {
  value: string;
  unit: string;
  takenAt: TypedMoment;
  reportedAt: TypedMoment;
  samplePointId: number | null;
  methodId: number | null;
  sampleNumber: string;
  reason: string;
}

/** A sample as it stands, in the fields of the form; times on the clock of the zone. */
export function correctionFieldsOf(
  sample: Pick<
    SampleVersion,
    'value' | 'qualifier' | 'unit' | 'takenAt' | 'reportedAt' | 'samplePointId' | 'methodId' | 'sampleNumber'
  >,
  zone: string,
): CorrectionFields {
  const { value, qualifier, unit, takenAt, reportedAt, samplePointId, methodId, sampleNumber } = sample;
  return {
    value: `${qualifier ?? ''}${value}`,
    unit,
    takenAt: takenAt ? momentAt(new Date(takenAt), zone) : { text: '', which: null },
    reportedAt: momentAt(new Date(reportedAt), zone),
    samplePointId,
    methodId,
    sampleNumber,
    reason: '',
  };
}

type Changes = Omit<SampleCorrection, 'reason' | 'version'>;

/**
 * What differs from `base`, to be sent, or a sentence for each field that can’t be used. Untouched times are not sent:
 * the field shows no seconds, and the hour that the clocks showed twice would be asked about anew.
 */
export function readCorrection(
  form: CorrectionFields,
  base: CorrectionFields,
  zone: string,
): { changes?: Changes; errors?: Record<string, string> } {
  const errors: Record<string, string> = {};
  const changes: Changes = {};
  const unit = form.unit.trim();
  if (form.value.trim() !== base.value || unit !== base.unit) {
    const read = readTypedResult(form.value);
    if (read.ok) changes.value = form.value.trim();
    else errors.value = read.message;
    if (unit !== base.unit) changes.unit = unit;
  }
  for (const field of ['takenAt', 'reportedAt'] as const) {
    if (JSON.stringify(form[field]) === JSON.stringify(base[field])) continue;
    const read = readMoment(form[field], zone);
    if (read.ok) changes[field] = read.at;
    else errors[field] = read.says;
  }
  if (form.samplePointId !== base.samplePointId && form.samplePointId !== null) {
    changes.samplePointId = form.samplePointId;
  }
  if (form.methodId !== base.methodId) changes.methodId = form.methodId;
  if (form.sampleNumber.trim() !== base.sampleNumber) changes.sampleNumber = form.sampleNumber.trim();
  if (changes.sampleNumber === '') errors.sampleNumber = 'Write a sample number.';
  if (form.reason.trim() === '') errors.reason = 'Write why it is corrected.';
  return Object.keys(errors).length > 0 ? { errors } : { changes };
}
