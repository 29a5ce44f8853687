import { z } from 'zod';
import { endpoint, idNumber, ids, idText, isoInstant, shortText } from './endpoint.ts';
import { pageQuery, paged } from './paging.ts';

/** What can happen to a unit, or to one soft sensor. A turnaround stops a unit as a stop does. */
export const eventKinds = [
  'stop',
  'start',
  'grade-change',
  'turnaround',
  'instrument-replaced',
  'method-change',
] as const;
export type EventKind = (typeof eventKinds)[number];

/** What an event happened to: a unit, or one soft sensor, which then names its unit too. */
const subject = {
  unitId: idNumber,
  unitName: z.string(),
  softSensorId: idNumber.nullable(),
  tagName: z.string().nullable(),
};

export const plantEvent = z.object({
  id: idNumber,
  siteId: idNumber,
  ...subject,
  kind: z.enum(eventKinds),
  at: isoInstant,
  note: z.string(),
  recordedBy: z.string(),
  recordedAt: isoInstant,
  withdrawnAt: isoInstant.nullable(),
  withdrawnBy: z.string().nullable(),
  withdrawnReason: z.string(),
});
export type PlantEvent = z.infer<typeof plantEvent>;

/** A unit or a soft sensor that is stopped now. */
export const standstill = z.object({ ...subject, since: isoInstant });
export type Standstill = z.infer<typeof standstill>;

export const eventNoteLength = 1000;
const note = z.string().trim().max(eventNoteLength, 'Keep the note under 1,000 characters.').default('');

const which = {
  kind: z.enum(eventKinds).optional(),
  from: isoInstant.optional(),
  to: isoInstant.optional(),
  /** Withdrawn events too. */
  withdrawn: z.enum(['true', 'false']).default('false'),
};

export const eventRow = z.object({
  line: z.number().int().positive(),
  outcome: z.enum(['added', 'skipped', 'refused']),
  /** What is recorded, or why the row is skipped or refused and how to mend it. */
  says: z.string(),
  /** The cells as they were written. */
  written: z.object({
    subject: z.string(),
    event: z.string(),
    at: z.string(),
    until: z.string(),
    note: z.string(),
  }),
});
export type EventRow = z.infer<typeof eventRow>;

/** Rows of a file by outcome, and the events that the added ones make: a stop with its end makes two. */
export const eventCounts = z.object({
  rows: z.number().int(),
  added: z.number().int(),
  events: z.number().int(),
  skipped: z.number().int(),
  refused: z.number().int(),
});
export type EventCounts = z.infer<typeof eventCounts>;

/** Which number comes first where the file does not show whether day or month does. */
export const dayOrders = ['day-month-year', 'month-day-year'] as const;
export type DayOrder = (typeof dayOrders)[number];

export const eventFile = z.object({
  fileName: z.string(),
  /** A date that may be read both ways; asked for before anything else. Null where the file leaves nothing open. */
  undecided: z.string().nullable(),
  counts: eventCounts,
  /** Refused rows first, then added, then skipped; at most 200 of each. */
  rows: z.array(eventRow),
  /** Stands for what becomes of all rows; send it back with the file to add them. */
  outcome: z.string(),
  committed: z.boolean(),
});
export type EventFile = z.infer<typeof eventFile>;

const exampleEvent: PlantEvent = {
  id: 1,
  siteId: 1,
  unitId: 1,
  unitName: 'Melting furnace 1',
  softSensorId: null,
  tagName: null,
  kind: 'stop',
  at: '2026-11-28T03:10:00.000Z',
  note: 'Burner 3 tripped',
  recordedBy: 'Tove Halbrook',
  recordedAt: '2026-11-28T03:25:00.000Z',
  withdrawnAt: null,
  withdrawnBy: null,
  withdrawnReason: '',
};

export const events = {
  'events.list': endpoint({
    method: 'GET',
    path: '/sites/:siteId/events',
    kind: 'json',
    summary: 'Events of a site, newest first, and what is stopped now',
    access: { may: 'site.view', on: 'site' },
    params: ids('siteId'),
    query: z.object({ ...pageQuery, ...which, unitId: idText.optional() }),
    reply: paged(plantEvent).extend({ stopped: z.array(standstill) }),
    example: { rows: [exampleEvent], total: 1, stopped: [] },
  }),
  'events.ofSensor': endpoint({
    method: 'GET',
    path: '/soft-sensors/:softSensorId/events',
    kind: 'json',
    summary: 'Events of a soft sensor and of its unit, newest first',
    access: { may: 'site.view', on: 'softSensor' },
    params: ids('softSensorId'),
    query: z.object({ ...pageQuery, ...which }),
    reply: paged(plantEvent).extend({ stopped: z.array(standstill) }),
    example: { rows: [exampleEvent], total: 1, stopped: [] },
  }),
  'events.add': endpoint({
    method: 'POST',
    path: '/sites/:siteId/events',
    kind: 'json',
    summary:
      'Record what happened to a unit or a soft sensor; `until` records the start after a stop with it',
    access: { may: 'events.record', on: 'site' },
    params: ids('siteId'),
    body: z.object({
      unitId: idNumber.nullable().default(null),
      softSensorId: idNumber.nullable().default(null),
      kind: z.enum(eventKinds, 'Choose what happened.'),
      at: isoInstant,
      until: isoInstant.nullable().default(null),
      note,
    }),
    reply: z.object({ rows: z.array(plantEvent) }),
    example: { rows: [exampleEvent] },
  }),
  'events.upload': endpoint({
    method: 'POST',
    path: '/sites/:siteId/event-files',
    kind: 'upload',
    summary: 'See what would become of each row of a CSV of events; with the outcome that was seen, add them',
    access: { may: 'events.record', on: 'site' },
    params: ids('siteId'),
    query: z.object({ dayOrder: z.enum(dayOrders).optional(), outcome: z.string().max(64).optional() }),
    maxBytes: 2 * 1024 ** 2,
    reply: eventFile,
    example: {
      fileName: 'events-2026.csv',
      undecided: null,
      counts: { rows: 1, added: 1, events: 2, skipped: 0, refused: 0 },
      rows: [
        {
          line: 2,
          outcome: 'added',
          says: 'Stop of Melting furnace 1 from 28 Nov 2026 04:10 to 29 Nov 2026 14:00.',
          written: {
            subject: 'Melting furnace 1',
            event: 'stop',
            at: '2026-11-28 04:10',
            until: '2026-11-29 14:00',
            note: '',
          },
        },
      ],
      outcome: '5d41402abc4b2a76',
      committed: false,
    },
  }),
  'events.withdraw': endpoint({
    method: 'POST',
    path: '/events/:eventId/withdrawal',
    kind: 'json',
    summary: 'Withdraw a wrongly recorded event with a reason; it stays on record',
    access: { may: 'events.record', on: 'event' },
    params: ids('eventId'),
    body: z.object({ reason: shortText('why it is withdrawn', 400) }),
    reply: plantEvent,
    example: exampleEvent,
  }),
};
