import { z } from 'zod';
import { endpoint, idNumber, idText, isoInstant, nothing } from './endpoint.ts';
import { isoDate } from './interval.ts';
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
  /** What it was before, and since when it is what it is. */
  healthBefore: health.nullable(),
  healthSince: isoInstant,
  stoppedSince: isoInstant.nullable(),
  reasons: z.array(healthReason),
  bias: z.number().nullable(),
  biasLow: z.number().nullable(),
  biasHigh: z.number().nullable(),
  counted: z.number().int(),
  allowedError: z.number().nullable(),
  lastErrors: z.array(errorStripPoint),
  lastReferenceAt: isoInstant.nullable(),
  owner: z.string().nullable(),
  recalibratedAt: isoInstant.nullable(),
  referencesSince: z.number().int(),
  /** The open recalibration or review that falls due first, by date at the site. */
  duty: z.object({ kind: z.enum(['recalibration', 'review']), dueOn: isoDate }).nullable(),
  /** May be confirmed as found by this person without looking at its evidence one by one. */
  confirmable: z.boolean(),
});
export type BoardRow = z.infer<typeof boardRow>;

/** Soft sensors in service by health; those of stopped units stand apart and are not in `total`. */
const byHealth = z.object({
  total: z.number().int(),
  fit: z.number().int(),
  watch: z.number().int(),
  unfit: z.number().int(),
  unproven: z.number().int(),
  stopped: z.number().int(),
});
export type CountsByHealth = z.infer<typeof byHealth>;

const counts = byHealth.extend({
  unfitInClosedLoop: z.number().int(),
  notInService: z.number().int(),
  /** Recalibrations and reviews that are late, and soft sensors that nobody rightly owns. */
  overdue: z.number().int(),
  unowned: z.number().int(),
});

/** Unfit and unproven of one site at the end of a month ("2026-11"). */
const month = z.object({ month: z.string(), unfit: z.number().int(), unproven: z.number().int() });

export const board = z.object({
  counts,
  sites: z.array(
    byHealth.extend({ siteId: idNumber, name: z.string(), zone: z.string(), months: z.array(month) }),
  ),
  /** Counts of what the person owns or is deputy of, where `whose` asks for it. */
  mine: byHealth.nullable(),
  /** How many of those asked for the person may confirm as found. */
  confirmable: z.number().int(),
  /** Worst first; at most `limit`. */
  rows: z.array(boardRow),
  waiting: z.array(
    z.object({
      kind: z.enum([
        'decide-revision',
        'decide-calibration',
        'enter-calibration',
        'answer-handover',
        'name-owner',
        'recalibration-late',
        'review-late',
      ]),
      softSensorId: idNumber,
      tagName: z.string(),
      name: z.string(),
      /** Revision, calibration, handover or duty. */
      subjectId: idNumber,
      number: z.number().int().nullable(),
      by: z.string().nullable(),
      /** When it was proposed or approved; for a late duty the day it was due. */
      since: z.string(),
    }),
  ),
  /** When this person looked last; null at the first time. "Since you last looked" counts from here. */
  lookedAt: isoInstant.nullable(),
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
      health: z.enum(['all', 'not-fit', 'fit', 'stopped', 'confirmable']).default('not-fit'),
      /** Mine: those that the person owns or is deputy of. */
      whose: z.enum(['all', 'mine']).default('all'),
      /** Only those whose health changed, or that were recalibrated, since this instant. */
      changedSince: isoInstant.optional(),
      limit: z.coerce.number().int().min(1).max(500).default(20),
    }),
    reply: board,
    example: {
      counts: {
        total: 52,
        fit: 41,
        watch: 6,
        unfit: 3,
        unproven: 2,
        unfitInClosedLoop: 1,
        notInService: 0,
        stopped: 1,
        overdue: 2,
        unowned: 1,
      },
      sites: [],
      mine: null,
      confirmable: 0,
      rows: [],
      waiting: [],
      lookedAt: null,
      at: '2026-12-01T06:00:00.000Z',
    },
  }),
  'board.looked': endpoint({
    method: 'POST',
    path: '/board/look',
    kind: 'json',
    summary: 'Say that the person looked at the board now; looks within an hour are one',
    access: 'self',
    body: nothing,
    reply: z.object({ lookedAt: isoInstant.nullable() }),
    example: { lookedAt: '2026-11-30T06:00:00.000Z' },
  }),
};
