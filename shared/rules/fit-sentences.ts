import type { FitRefusal } from '../numerics/regression.ts';
import { formatDate } from './format.ts';

/** Why a least-squares fit on the samples of [from, to) was refused, and how to mend it; days by the site's clock. */
export function fitRefusalSentence(
  refusal: FitRefusal,
  period: { from: string; to: string; zone: string },
): string {
  const last = new Date(Date.parse(period.to) - 1);
  const between = `between ${formatDate(period.from, period.zone)} and ${formatDate(last, period.zone)}`;
  switch (refusal.reason) {
    case 'not-enough-data':
      if (!refusal.got)
        return `There are no samples with all inputs ${between}. Choose a longer period or add samples.`;
      return `Only ${refusal.got} samples ${between} have all inputs; ${refusal.needed} are needed. Choose a longer period or fewer inputs.`;
    case 'collinear':
      return `${listed(refusal.collinearGroups?.[0] ?? [])} move together exactly, so their coefficients can’t be told apart. Leave one of them out.`;
    case 'ill-conditioned':
      return `The inputs hardly differ from one another (condition number ${refusal.figure?.toExponential(0) ?? 'too large'}), so no coefficient can be trusted. Leave inputs out.`;
    case 'no-spread':
      return refusal.field === 'y'
        ? `All samples ${between} have the same value, so nothing can be fitted. Choose another period.`
        : `${refusal.field} never changes ${between}, so its coefficient can’t be found. Leave it out or choose another period.`;
    default:
      return `The fit failed (${refusal.reason}${refusal.field ? `: ${refusal.field}` : ''}). Check the inputs and the period.`;
  }
}

function listed(names: readonly string[]): string {
  if (names.length < 2) return names[0] ?? 'Two inputs';
  return `${names.slice(0, -1).join(', ')} and ${names.at(-1)}`;
}
