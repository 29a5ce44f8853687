import { model as modelSchema, type Model } from '../../../shared/contracts/models.ts';
import { readDuration, splitDuration, type DurationText } from './durations.ts';
import { numberText, readNumber } from './number-text.ts';

/** A model as it is typed: figures and durations as texts. */
export interface ModelForm {
  form: Model['form'];
  step: DurationText;
  hold: DurationText;
  intercept: string;
  terms: { tagId: number; coefficient: string }[];
  residualSd: string;
  /** The model that the texts were made from: figures are shown rounded, but kept exact while they stay untouched. */
  exact: Model | null;
}

const SHOWN_FIGURES = 6;

/** A figure for a field, without digits that mean nothing. */
function figureText(value: number | null): string {
  return value === null ? '' : numberText(Number(value.toPrecision(SHOWN_FIGURES)));
}

/** The exact figure where its text still stands, else what was typed. */
function exactOr(exact: number | null | undefined, text: string, typed: number | null): number | null {
  return exact != null && figureText(exact) === text.trim() ? exact : typed;
}

export function blankModel(): ModelForm {
  return {
    form: 'regression',
    step: { amount: '1', per: 'min' },
    hold: { amount: '10', per: 'min' },
    intercept: '0',
    terms: [],
    residualSd: '',
    exact: null,
  };
}

export function toModelForm(model: Model): ModelForm {
  const shared = {
    form: model.form,
    hold: splitDuration(model.holdLimitMs),
    residualSd: figureText(model.residualSd),
    exact: model,
  };
  if (model.form === 'external') return { ...blankModel(), ...shared };
  return {
    ...shared,
    step: splitDuration(model.stepMs),
    intercept: figureText(model.intercept),
    terms: model.terms.map(({ tagId, coefficient }) => ({ tagId, coefficient: figureText(coefficient) })),
  };
}

/** Reads texts one by one and gathers what is wrong with each. */
function textReader() {
  const errors: Record<string, string> = {};
  return {
    errors,
    number(name: string, text: string, missing: string | null, exact?: number | null): number | null {
      const read = readNumber(text);
      if ('wrong' in read) errors[name] = read.wrong;
      else if (read.value === null && missing) errors[name] = missing;
      return 'wrong' in read ? null : exactOr(exact, text, read.value);
    },
    duration(name: string, text: DurationText): number | null {
      const read = readDuration(text);
      if ('wrong' in read) errors[name] = read.wrong;
      return 'wrong' in read ? null : read.ms;
    },
  };
}
type TextReader = ReturnType<typeof textReader>;

const UNFITTED = 'Write it; 0 until it is fitted.';

function typedModel(form: ModelForm, { number, duration }: TextReader): unknown {
  const shared = {
    form: form.form,
    holdLimitMs: duration('hold', form.hold),
    residualSd: number('residualSd', form.residualSd, null, form.exact?.residualSd),
  };
  if (form.form === 'external') return shared;
  const exact = form.exact?.form === 'regression' ? form.exact : null;
  const exactOf = (tagId: number) => exact?.terms.find((term) => term.tagId === tagId)?.coefficient;
  return {
    ...shared,
    stepMs: duration('step', form.step),
    intercept: number('intercept', form.intercept, UNFITTED, exact?.intercept),
    terms: form.terms.map(({ tagId, coefficient }, index) => ({
      tagId,
      coefficient: number(`terms.${index}.coefficient`, coefficient, UNFITTED, exactOf(tagId)),
    })),
  };
}

const ownNames: Record<string, string> = { holdLimitMs: 'hold', stepMs: 'step' };

/** What is typed as a model, or a sentence for each field: step, hold, intercept, residualSd, terms, terms.0.coefficient. */
export function readModelForm(form: ModelForm): { model: Model } | { errors: Record<string, string> } {
  const reader = textReader();
  const parsed = modelSchema.safeParse(typedModel(form, reader));
  const { errors } = reader;
  if (parsed.success && Object.keys(errors).length === 0) return { model: parsed.data };
  for (const issue of parsed.error?.issues ?? []) {
    const path = issue.path.map((part) => ownNames[String(part)] ?? String(part)).join('.');
    errors[path] ??= path === 'residualSd' ? 'An SD is above 0.' : issue.message;
  }
  return { errors };
}

/** Fields at fault that a reply names ("model.terms.2.tagId"), by the names used here. */
export function modelErrors(fields: Record<string, string>): Record<string, string> {
  return Object.fromEntries(
    Object.entries(fields).map(([path, message]) => {
      const own = path.replace(/^model\.(regression\.|external\.)?/, '');
      return [ownNames[own] ?? own, message];
    }),
  );
}
