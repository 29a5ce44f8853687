import type { Consumer, LifeState, SheetFields } from '../../../shared/contracts/register.ts';
import { formatNumber, formatQuantity } from '../../../shared/rules/format.ts';
import { sayDuration } from './durations.ts';
import { intervalWords } from './intervals.ts';

export const fieldLabels: Record<keyof SheetFields, string> = {
  unitId: 'Unit of plant',
  tagName: 'Tag',
  name: 'Name',
  quantity: 'Quantity',
  unit: 'Engineering unit',
  decimals: 'Decimals',
  rangeLow: 'Range from',
  rangeHigh: 'Range to',
  purpose: 'Purpose',
  importanceClass: 'Class',
  consumers: 'Used by',
  samplePointId: 'Sample point',
  methodId: 'Laboratory method',
  transportDelayMs: 'Transport delay',
  pairingWindowMs: 'Averaging window',
  steadyStateGate: 'Only steady samples count',
  promisedReferenceMs: 'A reference at least every',
  samplingPlan: 'Samples asked for',
  allowedErrorAbsolute: 'Allowed error, absolute',
  allowedErrorPercent: 'Allowed error, % of value',
  allowedSpread: 'Allowed spread',
  historyArrives: 'History arrives',
  historyEveryMs: 'History every',
  correctionMode: 'Corrections',
  updateFactor: 'Update factor',
  recalibrationInterval: 'Recalibration every',
  reviewInterval: 'Review every',
  fallback: 'When the estimate is bad',
  limitations: 'Known limitations and cautions',
  ownerId: 'Owner',
  deputyId: 'Deputy',
  approverId: 'Approver',
};

export const consumerKinds: { value: Consumer['kind']; label: string }[] = [
  { value: 'display', label: 'Display' },
  { value: 'closed-loop', label: 'Closed loop' },
  { value: 'quality-release', label: 'Quality release' },
  { value: 'emission-report', label: 'Emission report' },
];
export const kindWord = (kind: Consumer['kind']): string =>
  consumerKinds.find(({ value }) => value === kind)!.label.toLowerCase();

export const classWords: Record<SheetFields['importanceClass'], string> = {
  A: 'A: closed loop, release, emission',
  B: 'B: advisory',
  C: 'C: information',
};
export const correctionWords: Record<SheetFields['correctionMode'], string> = {
  monitor: 'Monitor only',
  propose: 'Propose and approve',
  automatic: 'Automatic within limits',
};
export const arrivalWords: Record<SheetFields['historyArrives'], string> = {
  live: 'Live',
  uploaded: 'Uploaded as files',
};
export const lifeWords: Record<LifeState, string> = {
  draft: 'Draft',
  'in-validation': 'In validation',
  'in-service': 'In service',
  suspended: 'Suspended',
  retired: 'Retired',
};

/** "10 °C", "2 % of the value", "10 °C or 2 % of the value, whichever is larger". */
export function allowedWords(
  fields: Pick<SheetFields, 'allowedErrorAbsolute' | 'allowedErrorPercent' | 'unit'>,
): string {
  const { allowedErrorAbsolute: absolute, allowedErrorPercent: percent, unit } = fields;
  const size = absolute === null ? null : formatQuantity(absolute, unit, digitsOf(absolute));
  const share = percent === null ? null : `${formatNumber(percent, digitsOf(percent))}\u00a0% of the value`;
  if (size !== null && share !== null) return `${size} or ${share}, whichever is larger`;
  return size ?? share ?? 'none stated';
}

/** Decimals a typed number was written with, so that a limit is shown as its owner stated it. */
export function digitsOf(value: number): number {
  return Math.min(6, String(value).split('.')[1]?.length ?? 0);
}

/** "furnace pressure loop (closed loop)". */
export function consumerWords(consumers: readonly Consumer[]): string {
  if (consumers.length === 0) return 'nobody yet';
  return consumers.map(({ kind, name }) => `${name} (${kindWord(kind)})`).join(', ');
}

/** Names of what a sheet points at by id. */
export type NamesOf = (field: 'unitId' | 'samplePointId' | 'methodId' | 'person', id: number) => string;

/** One field of a sheet in words, as a page or a comparison shows it. */
export function sayField(field: keyof SheetFields, fields: SheetFields, nameOf: NamesOf): string {
  const value = fields[field];
  if (value === null || value === '') return 'none';
  switch (field) {
    case 'unitId':
    case 'samplePointId':
    case 'methodId':
      return nameOf(field, Number(value));
    case 'ownerId':
    case 'deputyId':
    case 'approverId':
      return nameOf('person', Number(value));
    case 'consumers':
      return consumerWords(fields.consumers);
    case 'importanceClass':
      return classWords[fields.importanceClass];
    case 'correctionMode':
      return correctionWords[fields.correctionMode];
    case 'historyArrives':
      return arrivalWords[fields.historyArrives];
    case 'steadyStateGate':
      return fields.steadyStateGate ? 'yes' : 'no';
    case 'transportDelayMs':
    case 'pairingWindowMs':
    case 'promisedReferenceMs':
    case 'historyEveryMs':
      return sayDuration(Number(value));
    case 'samplingPlan':
      return planWords(fields.samplingPlan);
    case 'recalibrationInterval':
    case 'reviewInterval':
      return intervalWords(fields[field]);
    case 'allowedErrorPercent':
      return `${formatNumber(Number(value), digitsOf(Number(value)))}\u00a0%`;
    case 'rangeLow':
    case 'rangeHigh':
    case 'allowedErrorAbsolute':
    case 'allowedSpread':
      return formatQuantity(Number(value), fields.unit, digitsOf(Number(value)));
    default:
      return String(value);
  }
}

/** "2 a shift"; "not by plan" without one. */
export const planWords = (plan: SheetFields['samplingPlan']): string =>
  plan ? `${plan.count} a ${plan.per}` : 'not by plan';
