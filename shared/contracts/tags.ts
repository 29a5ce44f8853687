import { z } from 'zod';
import { endpoint, idNumber, ids, idText, isoInstant, shortText, version } from './endpoint.ts';

export const tag = z.object({
  id: idNumber,
  siteId: idNumber,
  unitId: idNumber.nullable(),
  unitName: z.string().nullable(),
  name: z.string(),
  description: z.string(),
  unit: z.string(),
  kind: z.enum(['measured', 'estimate', 'shadow']),
  rangeLow: z.number().nullable(),
  rangeHigh: z.number().nullable(),
  archivedAt: isoInstant.nullable(),
  version,
  readings: z.number().int(),
  firstAt: isoInstant.nullable(),
  lastAt: isoInstant.nullable(),
  lastValue: z.number().nullable(),
});
export type Tag = z.infer<typeof tag>;

export const tagFields = z.object({
  name: shortText('the tag’s name', 60),
  description: z.string().trim().max(200, 'Keep the description under 200 characters.').default(''),
  unit: z.string().trim().max(20, 'Keep the engineering unit under 20 characters.'),
  unitId: idNumber.nullable(),
  rangeLow: z.number().nullable(),
  rangeHigh: z.number().nullable(),
});
const rangeInOrder = (fields: { rangeLow: number | null; rangeHigh: number | null }) =>
  fields.rangeLow === null || fields.rangeHigh === null || fields.rangeLow < fields.rangeHigh;
const rangeMessage = { path: ['rangeHigh'], message: 'The upper end of the range must be above the lower.' };

const exampleTag: Tag = {
  id: 1,
  siteId: 1,
  unitId: 1,
  unitName: 'Melting furnace 1',
  name: 'TI-1401',
  description: 'Shell temperature',
  unit: '°C',
  kind: 'measured',
  rangeLow: 0,
  rangeHigh: 600,
  archivedAt: null,
  version: 1,
  readings: 525_600,
  firstAt: '2025-12-01T00:00:00.000Z',
  lastAt: '2026-11-30T23:59:00.000Z',
  lastValue: 301.4,
};

/** Points of one tag for a chart. `at` is in epoch milliseconds, for arrays of thousands; a gap is a null. */
export const series = z.object({
  at: z.array(z.number()),
  value: z.array(z.number().nullable()),
  low: z.array(z.number().nullable()).optional(),
  high: z.array(z.number().nullable()).optional(),
  from: z.enum(['readings', 'hours']),
});
export type Series = z.infer<typeof series>;

export const tags = {
  'tags.list': endpoint({
    method: 'GET',
    path: '/sites/:siteId/tags',
    kind: 'json',
    summary: 'Tags of a site',
    access: { may: 'site.view', on: 'site' },
    params: ids('siteId'),
    query: z.object({ unitId: idText.optional() }),
    reply: z.object({ rows: z.array(tag) }),
    example: { rows: [exampleTag] },
  }),
  'tags.add': endpoint({
    method: 'POST',
    path: '/sites/:siteId/tags',
    kind: 'json',
    summary: 'Add one or several tags',
    access: { may: 'site.configure', on: 'site' },
    params: ids('siteId'),
    body: z.object({ tags: z.array(tagFields.refine(rangeInOrder, rangeMessage)).min(1).max(500) }),
    reply: z.object({ rows: z.array(tag) }),
    example: { rows: [exampleTag] },
  }),
  'tags.change': endpoint({
    method: 'PUT',
    path: '/tags/:tagId',
    kind: 'json',
    summary: 'Change a tag, archive or take back',
    access: { may: 'site.configure', on: 'tag' },
    params: ids('tagId'),
    body: tagFields.extend({ archived: z.boolean(), version }).refine(rangeInOrder, rangeMessage),
    reply: tag,
    example: exampleTag,
  }),
  'tags.series': endpoint({
    method: 'GET',
    path: '/tags/:tagId/series',
    kind: 'json',
    summary: 'Readings of a tag for a chart: raw, or by the hour where there are too many',
    access: { may: 'site.view', on: 'tag' },
    params: ids('tagId'),
    query: z.object({ from: isoInstant, to: isoInstant }),
    reply: series,
    example: { at: [1764547200000], value: [301.4], from: 'readings' },
  }),
  'tags.removeReadings': endpoint({
    method: 'POST',
    path: '/tags/:tagId/removals',
    kind: 'json',
    summary: 'Remove readings of a tag between two instants, with a reason',
    access: { may: 'history.remove', on: 'tag' },
    params: ids('tagId'),
    body: z.object({ from: isoInstant, to: isoInstant, reason: shortText('the reason', 400) }),
    reply: z.object({ removed: z.number().int() }),
    example: { removed: 1440 },
  }),
};
