import type { Health, HealthReason } from '../contracts/judging.ts';
import { formatNumber, formatQuantity, plural } from './format.ts';

/** What a sentence about one soft sensor needs: its engineering unit and decimals. */
export interface Measure {
  unit: string;
  decimals: number;
}

const hourMs = 3_600_000;
const dayMs = 24 * hourMs;

/** A duration as people say it: "46 days", "7 hours". Days from two on, hours below, minutes below one. */
export function durationWords(ms: number): string {
  if (ms >= 2 * dayMs) return plural(Math.floor(ms / dayMs), 'day');
  if (ms >= hourMs) return plural(Math.floor(ms / hourMs), 'hour');
  return plural(Math.max(1, Math.round(ms / 60_000)), 'minute');
}

export const healthWord: Record<Health, string> = {
  fit: 'Fit',
  watch: 'Watch',
  unfit: 'Unfit',
  unproven: 'Unproven',
};

const figure = (reason: HealthReason, name: string): number => Number(reason.figures[name] ?? NaN);

/**
 * A reason of health as a sentence with its figures: what is wrong, how much, how sure.
 */
export function healthSentence(reason: HealthReason, measure: Measure): string {
  const quantity = (name: string) =>
    formatQuantity(figure(reason, name), measure.unit, biasDecimals(measure));
  switch (reason.code) {
    case 'within-allowed':
    case 'bias-beyond-allowed':
    case 'bias-reaches-allowed':
    case 'interval-wider-than-allowed':
      return biasSentence(reason, measure);
    case 'spread-beyond-allowed':
      return `Single errors spread ±\u00a0${quantity('spread')} over the last ${plural(figure(reason, 'n'), 'sample')}; allowed ±\u00a0${quantity('allowedSpread')}.`;
    case 'worse-than-holding':
      return `No better than holding the last laboratory result: error ${quantity('rmse')} RMSE against ${quantity('holdRmse')} over the last ${plural(figure(reason, 'n'), 'sample')}.`;
    case 'no-reference':
      return `No reference${sinceBaseline(reason) || ' yet'}. Ask for samples.`;
    case 'reference-overdue':
      return `No reference for ${durationWords(figure(reason, 'ageMs'))}; promised every ${durationWords(figure(reason, 'promisedMs'))}.`;
    case 'too-few-errors':
      return `${plural(figure(reason, 'counted'), 'counted error')}${sinceBaseline(reason) || ' so far'}; ${figure(reason, 'needed')} are needed to judge.`;
    case 'no-inputs':
      return reason.figures.sinceMs === null
        ? 'No estimate has been computed yet.'
        : `No estimate for ${durationWords(figure(reason, 'nowMs') - figure(reason, 'sinceMs'))}: its inputs have not arrived.`;
    case 'inputs-bad':
      return 'An input is bad.';
    case 'not-in-service':
      return 'Not in service.';
    case 'too-many-uncounted':
      return `${figure(reason, 'count')} of the last ${plural(figure(reason, 'of'), 'sample')} did not count, so nothing better can be said.`;
  }
}

const sinceWords: Record<string, string> = {
  training: ' since the training period',
  revision: ' since the present model came into force',
  calibration: ' since the last correction',
  event: ' since the last event',
};

const sinceBaseline = (reason: HealthReason): string => sinceWords[String(reason.figures.baseline)] ?? '';

function biasSentence(reason: HealthReason, measure: Measure): string {
  const decimals = biasDecimals(measure);
  const bias = figure(reason, 'bias');
  const allowed = formatQuantity(figure(reason, 'allowed'), measure.unit, measure.decimals);
  if (!Number.isFinite(bias)) return `Bias inside the allowed error of ${allowed}.`;
  const interval = `95 % interval ${formatNumber(figure(reason, 'low'), decimals)} to ${formatNumber(figure(reason, 'high'), decimals)}`;
  const over = `over the last ${plural(figure(reason, 'n'), 'sample')}`;
  const reads = `${biasWords(bias, measure.unit, decimals)} (${interval}) ${over}`;
  if (reason.figures.leaving)
    return `${reads}; allowed error ${allowed}. Watched until 9 samples in a row are inside.`;
  if (reason.code === 'interval-wider-than-allowed') {
    return `${reads}: too uncertain to judge against the allowed error of ${allowed}. More samples are needed.`;
  }
  return `${reads}; allowed error ${allowed}.`;
}

/** "Reads 15.3 °C high", "Reads 6.0 °C low", or that no bias shows at these decimals. */
export function biasWords(bias: number, unit: string, decimals: number): string {
  const size = formatQuantity(Math.abs(bias), unit, decimals);
  if (Number(Math.abs(bias).toFixed(decimals)) === 0) return 'Reads neither high nor low';
  return `Reads ${size} ${bias > 0 ? 'high' : 'low'}`;
}

/** Decimals for a bias: the sensor's own and one more, as a mean is known better than one value. */
export const biasDecimals = (measure: Measure): number => Math.min(6, measure.decimals + 1);

const notCounted: Record<string, string> = {
  'no-estimate': 'No estimate at that time',
  censored: 'Beyond the method’s range',
  'date-without-time': 'Date without a time',
  unsteady: 'The process was not steady',
  held: 'Held for a re-test',
  'unit-stopped': 'The unit was stopped',
  'outside-validity-region': 'Outside the validity region',
  'no-input': 'An input was missing',
  'composite-gaps': 'Estimates for less than 90 % of a composite’s time',
  composite: 'Gathered over hours, not at one time',
};

/** Why a sample doesn’t count, in words. */
export const notCountedWords = (code: string): string => notCounted[code] ?? code;
