import { z } from 'zod';
import { endpoint, idNumber, idText, isoInstant } from './endpoint.ts';
import { errorStripPoint, health, healthReason } from './judging.ts';
import { consumer } from './register.ts';

export const boardRow = z.object({
  softSensorId: idNumber,
  siteId: idNumber,
  siteName: z.string(),
  unitName: z.string(),
  tagName: z.string(),
  name: z.string(),
  unit: z.string(),
  decimals: z.number().int(),
  importanceClass: z.enum(['A', 'B', 'C']),
  consumers: z.array(consumer),
  health,
  reasons: z.array(healthReason),
  bias: z.number().nullable(),
  biasLow: z.number().nullable(),
  biasHigh: z.number().nullable(),
  counted: z.number().int(),
  allowedError: z.number().nullable(),
  lastErrors: z.array(errorStripPoint),
  lastReferenceAt: isoInstant.nullable(),
  owner: z.string().nullable(),
});
export type BoardRow = z.infer<typeof boardRow>;

const counts = z.object({
  total: z.number().int(),
  fit: z.number().int(),
  watch: z.number().int(),
  unfit: z.number().int(),
  unproven: z.number().int(),
  unfitInClosedLoop: z.number().int(),
  notInService: z.number().int(),
});

/** Unfit and unproven of one site at the end of a month ("2026-11"). */
const month = z.object({ month: z.string(), unfit: z.number().int(), unproven: z.number().int() });

export const board = z.object({
  counts,
  sites: z.array(
    z.object({
      siteId: idNumber,
      name: z.string(),
      zone: z.string(),
      total: z.number().int(),
      months: z.array(month),
    }),
  ),
  /** Worst first; at most `limit`. */
  rows: z.array(boardRow),
  waiting: z.array(
    z.object({
      kind: z.enum(['decide-revision', 'name-owner']),
      softSensorId: idNumber,
      tagName: z.string(),
      name: z.string(),
      revisionNumber: z.number().int().nullable(),
      proposedBy: z.string().nullable(),
    }),
  ),
  at: isoInstant,
});
export type Board = z.infer<typeof board>;

export const boards = {
  'board.get': endpoint({
    method: 'GET',
    path: '/board',
    kind: 'json',
    summary: 'Which estimates can be relied on, worst first',
    access: { may: 'site.view', on: 'sites' },
    query: z.object({
      siteId: idText.optional(),
      health: z.enum(['all', 'not-fit', 'fit']).default('not-fit'),
      limit: z.coerce.number().int().min(1).max(500).default(20),
    }),
    reply: board,
    example: {
      counts: { total: 52, fit: 41, watch: 6, unfit: 3, unproven: 2, unfitInClosedLoop: 1, notInService: 0 },
      sites: [],
      rows: [],
      waiting: [],
      at: '2026-12-01T06:00:00.000Z',
    },
  }),
};
