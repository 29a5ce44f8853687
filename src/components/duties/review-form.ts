import type { z } from 'zod';
import { duties, type ReviewAnswers, type ReviewConclusion } from '../../../shared/contracts/duties.ts';
import type { Sheet } from '../../../shared/contracts/register.ts';
import { formatDate } from '../../../shared/rules/format.ts';
import { classWords, consumerWords } from '../register/sheet-words.ts';

const reviewBody = duties['reviews.add'].body;
type NewReview = z.infer<typeof reviewBody>;

/** What is answered of a review as one to be recorded, or a sentence for each part that is missing. */
export function readReview(written: {
  answers: Partial<ReviewAnswers>;
  conclusion: ReviewConclusion | null;
  note: string;
}): { review: NewReview } | { errors: Record<string, string> } {
  const parsed = reviewBody.safeParse({ ...written, note: written.note.trim() });
  if (parsed.success) return { review: parsed.data };
  const errors: Record<string, string> = {};
  for (const { path, message } of parsed.error.issues) {
    const said =
      path[0] === 'answers'
        ? 'Say whether it is in order.'
        : path[0] === 'conclusion'
          ? 'Say what follows from it.'
          : message;
    errors[path.join('.')] ??= said;
  }
  return { errors };
}

/** What the data sheet says on each question of a review. */
export function sheetAnswers(sheet: Sheet): Record<keyof ReviewAnswers, string> {
  const { fields, revisionInForce, siteZone } = sheet;
  const fit = revisionInForce?.fit;
  const since = revisionInForce?.effectiveFrom;
  return {
    purpose: fields.purpose || 'The sheet states no purpose.',
    consumers: `Used by ${consumerWords(fields.consumers)}; class ${classWords[fields.importanceClass]}.`,
    inputs: sheet.inputs.length
      ? `${sheet.inputs.map(({ name, unit }) => (unit ? `${name} (${unit})` : name)).join(', ')}.`
      : 'The sheet names no inputs.',
    validity: fit
      ? `Fitted to ${fit.samples} samples from ${formatDate(fit.from, siteZone)} to ${formatDate(fit.to, siteZone)}.`
      : since
        ? `The model is in force since ${formatDate(since, siteZone)}; it was not fitted here.`
        : 'No model is in force.',
    owner: `Owner: ${sheet.owner?.name ?? 'none'}. Deputy: ${sheet.deputy?.name ?? 'none'}.`,
  };
}
