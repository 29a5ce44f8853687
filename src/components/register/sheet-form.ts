import type { z } from 'zod';
import type { Interval } from '../../../shared/contracts/interval.ts';
import { sheetBody, type Consumer, type SheetFields } from '../../../shared/contracts/register.ts';
import { defaultSamplingPlan } from '../../../shared/rules/sampling-plan.ts';
import { readDuration, splitDuration, type DurationText } from './durations.ts';
import { readInterval, splitInterval, type IntervalText } from './intervals.ts';
import { numberText, readNumber } from './number-text.ts';

const numberFields = [
  'rangeLow',
  'rangeHigh',
  'allowedErrorAbsolute',
  'allowedErrorPercent',
  'allowedSpread',
  'decimals',
  'updateFactor',
] as const;
const durationFields = [
  'transportDelayMs',
  'pairingWindowMs',
  'promisedReferenceMs',
  'historyEveryMs',
] as const;
const intervalFields = ['recalibrationInterval', 'reviewInterval'] as const;
type NumberField = (typeof numberFields)[number];
type DurationField = (typeof durationFields)[number];
type IntervalField = (typeof intervalFields)[number];

/** A data sheet as it is typed: figures and durations as texts, so that nothing is lost while it can't be read yet. */
export type SheetForm = Omit<SheetFields, NumberField | DurationField | IntervalField | 'unitId'> & {
  unitId: number | null;
} & Record<NumberField, string> &
  Record<DurationField, DurationText> &
  Record<IntervalField, IntervalText>;

export type SheetErrors = Record<string, string>;
export type ImportanceClass = SheetFields['importanceClass'];

const hour = 3_600_000;
const day = 24 * hour;

const months = (every: number): Interval => ({ every, unit: 'months', counted: 'last-done', anchorOn: null });

/** What usually holds for a class (common practice, no source); a person may change each. */
const classDefaults: Record<
  ImportanceClass,
  Pick<SheetFields, 'promisedReferenceMs' | 'samplingPlan' | IntervalField>
> = {
  A: {
    promisedReferenceMs: 2 * day,
    samplingPlan: defaultSamplingPlan('A'),
    recalibrationInterval: months(3),
    reviewInterval: months(12),
  },
  B: {
    promisedReferenceMs: 7 * day,
    samplingPlan: defaultSamplingPlan('B'),
    recalibrationInterval: months(6),
    reviewInterval: months(12),
  },
  C: {
    promisedReferenceMs: 28 * day,
    samplingPlan: defaultSamplingPlan('C'),
    recalibrationInterval: months(12),
    reviewInterval: months(24),
  },
};

export function blankForm(): SheetForm {
  return toForm({
    unitId: 0,
    tagName: '',
    name: '',
    quantity: '',
    unit: '',
    decimals: 1,
    rangeLow: null,
    rangeHigh: null,
    purpose: '',
    importanceClass: 'B',
    consumers: [],
    samplePointId: null,
    methodId: null,
    transportDelayMs: 0,
    pairingWindowMs: 10 * 60_000,
    steadyStateGate: true,
    allowedErrorAbsolute: null,
    allowedErrorPercent: null,
    allowedSpread: null,
    historyArrives: 'live',
    historyEveryMs: 60_000,
    correctionMode: 'propose',
    updateFactor: 0.2,
    fallback: '',
    limitations: '',
    ownerId: null,
    deputyId: null,
    approverId: null,
    ...classDefaults.B,
  });
}

export function toForm(fields: SheetFields): SheetForm {
  const numbers = Object.fromEntries(numberFields.map((name) => [name, numberText(fields[name])]));
  const durations = Object.fromEntries(durationFields.map((name) => [name, splitDuration(fields[name])]));
  const intervals = Object.fromEntries(intervalFields.map((name) => [name, splitInterval(fields[name])]));
  return {
    ...fields,
    consumers: fields.consumers.map((consumer) => ({ ...consumer })),
    unitId: fields.unitId === 0 ? null : fields.unitId,
    ...(numbers as Record<NumberField, string>),
    ...(durations as Record<DurationField, DurationText>),
    ...(intervals as Record<IntervalField, IntervalText>),
  };
}

/** Changes the class, and with it the intervals that still stand as the class before had them. */
export function withClass(form: SheetForm, importanceClass: ImportanceClass): SheetForm {
  const [before, after] = [classDefaults[form.importanceClass], classDefaults[importanceClass]];
  const interval = (field: IntervalField) =>
    JSON.stringify(form[field]) === JSON.stringify(splitInterval(before[field]))
      ? splitInterval(after[field])
      : form[field];
  const promised = readDuration(form.promisedReferenceMs);
  const untouched = 'ms' in promised && promised.ms === before.promisedReferenceMs;
  const samePlan = JSON.stringify(form.samplingPlan) === JSON.stringify(before.samplingPlan);
  return {
    ...form,
    importanceClass,
    samplingPlan: samePlan ? after.samplingPlan : form.samplingPlan,
    recalibrationInterval: interval('recalibrationInterval'),
    reviewInterval: interval('reviewInterval'),
    promisedReferenceMs: untouched ? splitDuration(after.promisedReferenceMs) : form.promisedReferenceMs,
  };
}

/** The least class that the consumers call for: closed loop, release and emission are A. */
export function classFor(consumers: readonly Consumer[]): ImportanceClass {
  return consumers.some(({ kind }) => kind !== 'display') ? 'A' : 'B';
}

const needed: Partial<Record<NumberField, string>> = {
  decimals: 'Write how many decimals are shown, 0 to 6.',
  updateFactor: 'Write a factor above 0, at most 1.',
};

/** What is typed as a sheet to be saved, or a sentence for each field that can't be used. */
export function readForm(form: SheetForm): { fields: SheetFields } | { errors: SheetErrors } {
  const errors: SheetErrors = {};
  const values: Record<string, unknown> = { ...form };
  if (form.unitId === null) errors.unitId = 'Choose the unit of plant.';
  for (const name of numberFields) {
    const read = readNumber(form[name]);
    if ('wrong' in read) errors[name] = read.wrong;
    else if (read.value === null && needed[name]) errors[name] = needed[name];
    else values[name] = read.value;
  }
  for (const name of durationFields) {
    const read = readDuration(form[name]);
    if ('wrong' in read) errors[name] = read.wrong;
    else values[name] = read.ms;
  }
  for (const name of intervalFields) {
    const read = readInterval(form[name]);
    if ('interval' in read) values[name] = read.interval;
    else {
      values[name] = standIn[name];
      for (const [part, says] of Object.entries(read.wrong)) say(errors, [name, part], says);
    }
  }
  const parsed = sheetBody.safeParse(values);
  if (parsed.success && Object.keys(errors).length === 0) return { fields: parsed.data };
  const found = parsed.error?.issues ?? [];
  for (const issue of [...found, ...issuesBetweenFields(values, found)]) {
    say(errors, issue.path, issue.message);
  }
  return { errors };
}

/** Beside the part at fault, and for the field that it belongs to. */
function say(errors: SheetErrors, path: readonly PropertyKey[], message: string) {
  errors[path.join('.')] ??= message;
  errors[String(path[0])] ??= message;
}

/** What any sheet could hold where a field can't be read yet. */
const standIn: Partial<SheetFields> = {
  unitId: 1,
  tagName: '-',
  name: '-',
  quantity: '-',
  unit: '',
  decimals: 0,
  consumers: [],
  purpose: '',
  fallback: '',
  limitations: '',
  transportDelayMs: 0,
  pairingWindowMs: 0,
  promisedReferenceMs: 1,
  historyEveryMs: 1,
  updateFactor: 1,
  recalibrationInterval: months(1),
  reviewInterval: months(1),
};

/** Rules between fields are only asked of fields that can be read, so those at fault are stood in for. */
function issuesBetweenFields(values: Record<string, unknown>, found: readonly z.core.$ZodIssue[]) {
  if (found.length === 0) return [];
  const standIns = Object.fromEntries(
    found.map(({ path }) => [path[0], standIn[path[0] as keyof SheetFields] ?? null]),
  );
  return sheetBody.safeParse({ ...values, ...standIns }).error?.issues ?? [];
}
