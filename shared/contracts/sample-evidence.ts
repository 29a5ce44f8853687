import { z } from 'zod';

const figures = z.record(z.string(), z.union([z.string(), z.number()]));

export const evidenceParts = [
  'sheet',
  'header',
  'columns',
  'decimal',
  'dateOrder',
  'zone',
  'unit',
  'missingWords',
] as const;
export type EvidencePart = (typeof evidenceParts)[number];
export const evidenceCodes = [
  'sheet-most-like',
  'header-names',
  'header-above-figures',
  'columns-by-cells',
  'decimal',
  'decimal-open',
  'decimal-mixed',
  'no-decimal',
  'numbers-as-numbers',
  'date-order',
  'date-order-open',
  'date-order-mixed',
  'year-first',
  'month-in-words',
  'milliseconds',
  'serial-dates',
  'offsets-in-cells',
  'zone-of-site',
  'zone-skips-hours',
  'unit-in-header',
  'unit-in-row',
  'unit-open',
  'missing-words',
] as const;
export type EvidenceCode = (typeof evidenceCodes)[number];

/** What in a file speaks for one part of its mapping, or leaves it open; `sayEvidence` says it in words. */
export const fileEvidence = z.object({
  of: z.enum(evidenceParts),
  code: z.enum(evidenceCodes),
  figures,
});
export type FileEvidence = z.infer<typeof fileEvidence>;

export const noticeCodes = [
  'title-lines',
  'times-like-report',
  'rounded-times',
  'lost-zeros',
  'moved-from-last',
] as const;
export type NoticeCode = (typeof noticeCodes)[number];

export const fileNotice = z.object({ code: z.enum(noticeCodes), figures });
export type FileNotice = z.infer<typeof fileNotice>;
