import type { BoardRow } from '../../../shared/contracts/board.ts';
import { formatAge, formatNumber, formatQuantity, wallClock } from '../../../shared/rules/format.ts';
import { biasDecimals, durationWords, healthSentence } from '../../../shared/rules/sentences.ts';
import type { SiteMonths } from '../charts/month-layout.ts';
import { kindWord } from '../register/sheet-words.ts';

/** Words of which the first part is the finding, and the rest explains it. */
export interface Finding {
  strong: string;
  rest: string;
}

const biasCodes = [
  'within-allowed',
  'bias-beyond-allowed',
  'bias-reaches-allowed',
  'interval-wider-than-allowed',
];

/** "15.3 °C high (± 3.0), allowed 10"; null while no bias is known. */
export function biasFinding(row: BoardRow): Finding | null {
  const { bias, biasLow, biasHigh, allowedError, unit } = row;
  if (bias === null) return null;
  const decimals = biasDecimals(row);
  const half = biasLow === null || biasHigh === null ? null : (biasHigh - biasLow) / 2;
  const none = Number(Math.abs(bias).toFixed(decimals)) === 0;
  const side = bias > 0 ? 'high' : 'low';
  const parts = [
    ...(half === null ? [] : [`(±\u00a0${formatNumber(half, decimals)})`]),
    ...(allowedError === null ? [] : [`allowed\u00a0${formatNumber(allowedError, row.decimals)}`]),
  ];
  return {
    strong: none ? 'neither high nor low' : `${formatQuantity(Math.abs(bias), unit, decimals)} ${side}`,
    rest: parts.join(', '),
  };
}

/** What stands in the column of the bias: its figures, or the worse reason that no bias can speak of. */
export function rowFinding(row: BoardRow): Finding {
  const worst = row.reasons[0];
  const bias = biasFinding(row);
  if (worst && !biasCodes.includes(worst.code)) return otherFinding(row, worst, bias);
  return bias ?? { strong: '', rest: worst ? healthSentence(worst, row) : 'not judged yet' };
}

function otherFinding(row: BoardRow, worst: BoardRow['reasons'][number], bias: Finding | null): Finding {
  if (worst.code === 'reference-overdue') {
    const { ageMs, promisedMs } = worst.figures;
    return {
      strong: `no reference for ${durationWords(Number(ageMs))}`,
      rest: `(promised every ${durationWords(Number(promisedMs))})`,
    };
  }
  const sentence = healthSentence(worst, row);
  if (worst.health === 'unproven' || bias === null) return { strong: sentence.replace(/\.$/, ''), rest: '' };
  return { strong: bias.strong, rest: `${bias.rest}. ${sentence}` };
}

/** The date that a clock at the site shows, "2026-12-01". */
export function dayAt(now: string, zone: string): string {
  const { year, month, day } = wallClock(now, zone);
  return `${year}-${String(month).padStart(2, '0')}-${String(day).padStart(2, '0')}`;
}

/** "closed loop (A)": the weightiest use, and the class. */
export function usedFor(row: BoardRow): string {
  const order = ['closed-loop', 'quality-release', 'emission-report', 'display'] as const;
  const kinds = order.filter((kind) => row.consumers.some((consumer) => consumer.kind === kind));
  const others = kinds.length > 1 ? ` + ${kinds.length - 1}` : '';
  const use = kinds[0] === undefined ? 'no consumer named' : `${kindWord(kinds[0])}${others}`;
  return `${use} (${row.importanceClass})`;
}

export function referenceAge(row: BoardRow, now: string): string {
  return row.lastReferenceAt === null ? 'none yet' : formatAge(row.lastReferenceAt, now);
}

/** The last twelve months up to that of `now`, a month without a record as one without blocks. */
export function twelveMonths(months: SiteMonths['months'], now: string): SiteMonths['months'] {
  const [year, month] = [Number(now.slice(0, 4)), Number(now.slice(5, 7))];
  const known = new Map(months.map((entry) => [entry.month, entry]));
  return Array.from({ length: 12 }, (_value, back) => {
    const name = new Date(Date.UTC(year, month - 12 + back, 1)).toISOString().slice(0, 7);
    return known.get(name) ?? { month: name, unfit: 0, unproven: 0 };
  });
}
