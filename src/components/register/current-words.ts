import type { HealthReason } from '../../../shared/contracts/judging.ts';
import type { Sheet } from '../../../shared/contracts/register.ts';
import {
  formatAge,
  formatDay,
  formatClock,
  formatNumber,
  formatQuantity,
} from '../../../shared/rules/format.ts';
import { bandFactor } from '../../../shared/rules/band.ts';

const HALF_HOUR = 30 * 60_000;

/** Is the last estimate recent enough to be called "now"? */
function isNow(sheet: Sheet, at: string, now: Date): boolean {
  const every = sheet.fields.historyArrives === 'live' ? sheet.fields.historyEveryMs : 0;
  return now.getTime() - Date.parse(at) <= Math.max(3 * every, HALF_HOUR);
}

const when = (iso: string, zone: string, now: Date) =>
  `${formatDay(iso, zone, now)} ${formatClock(iso, zone)}`;

/** The current value in parts: what to call it, the value, and how old it is. */
export function currentWords(sheet: Sheet, now: Date): { lead: string; value: string; age: string } {
  const { status, fields, siteZone } = sheet;
  if (!status || status.currentValue === null || status.currentAt === null) {
    return { lead: 'No estimate yet', value: '', age: '' };
  }
  const band =
    status.currentSd === null ? '' : ` ± ${formatNumber(bandFactor * status.currentSd, fields.decimals)}`;
  const value = `${formatQuantity(status.currentValue, fields.unit, fields.decimals)}${band}`;
  if (isNow(sheet, status.currentAt, now)) return { lead: 'Now', value, age: '' };
  return {
    lead: 'Last estimate',
    value,
    age: `, ${when(status.currentAt, siteZone, now)} (${formatAge(status.currentAt, now)})`,
  };
}

/** "last reference 2 d ago". */
export function referenceWords(sheet: Sheet, now: Date): string {
  if (!sheet.status) return 'not judged yet';
  const at = sheet.status?.lastReferenceAt ?? null;
  return at === null ? 'no reference yet' : `last reference ${formatAge(at, now)}`;
}

/** What to use until the estimate is mended: the fallback, and the last laboratory value. */
export function untilMended(sheet: Sheet, now: Date): string | null {
  const { status, fields, siteZone } = sheet;
  const lab =
    status?.lastReferenceValue != null && status.lastReferenceAt !== null
      ? `laboratory value ${formatQuantity(status.lastReferenceValue, fields.unit, fields.decimals)}, ${when(status.lastReferenceAt, siteZone, now)}`
      : null;
  const said = fields.fallback
    .trim()
    .replace(/\.$/, '')
    .replace(/^[A-Z](?=[a-z])/, (letter) => letter.toLowerCase());
  if (said && lab) return `${said} (${lab})`;
  return said || lab;
}

/** "Range 1,200 to 1,650 °C." where the sheet states one. */
export function rangeWords({ fields }: Sheet): string {
  const { rangeLow, rangeHigh, unit, decimals } = fields;
  if (rangeLow === null && rangeHigh === null) return '';
  const high = formatQuantity(rangeHigh, unit, decimals);
  if (rangeLow === null) return `Range up to ${high}.`;
  if (rangeHigh === null) return `Range from ${formatQuantity(rangeLow, unit, decimals)}.`;
  return `Range ${formatNumber(rangeLow, decimals)} to ${high}.`;
}

const biasCodes = ['bias-beyond-allowed', 'bias-reaches-allowed', 'interval-wider-than-allowed'];

/** Reasons worth a line of their own: a bias on its way out says nothing beside one that stands. */
export function standingReasons(reasons: readonly HealthReason[]): HealthReason[] {
  const biased = reasons.some(({ code, figures }) => biasCodes.includes(code) && !figures.leaving);
  return reasons.filter(({ code, figures }) => !(biased && figures.leaving && biasCodes.includes(code)));
}

export function isEmission(sheet: Sheet): boolean {
  return sheet.fields.consumers.some(({ kind }) => kind === 'emission-report');
}
