import { z } from 'zod';
import { gapCodes } from './duties.ts';
import { endpoint, idNumber, ids, isoInstant, longText, shortText } from './endpoint.ts';

export const ownerParts = ['owner', 'deputy'] as const;
export type OwnerPart = (typeof ownerParts)[number];

const person = z.object({ id: idNumber, name: z.string() });

export const handover = z.object({
  id: idNumber,
  siteId: idNumber,
  siteName: z.string(),
  siteZone: z.string(),
  softSensorId: idNumber,
  tagName: z.string(),
  name: z.string(),
  part: z.enum(ownerParts),
  from: person.nullable(),
  to: person,
  proposedAt: isoInstant,
  proposedBy: person,
  reason: z.string(),
  answer: z.enum(['accepted', 'declined', 'withdrawn']).nullable(),
  answeredAt: isoInstant.nullable(),
  answeredBy: person.nullable(),
  answerReason: z.string(),
  /** Whether the person who asks may answer it, or take the offer back. */
  mayAnswer: z.boolean(),
  mayWithdraw: z.boolean(),
});
export type Handover = z.infer<typeof handover>;

/** Who looked after a soft sensor from when until when; `until` null: now. */
export const ownershipEntry = z.object({
  from: isoInstant,
  until: isoInstant.nullable(),
  owner: person.nullable(),
  deputy: person.nullable(),
  approver: person.nullable(),
  recordedBy: person,
  reason: z.string(),
});
export type OwnershipEntry = z.infer<typeof ownershipEntry>;

export const responsibility = z.object({
  softSensorId: idNumber,
  siteId: idNumber,
  siteName: z.string(),
  tagName: z.string(),
  name: z.string(),
  importanceClass: z.enum(['A', 'B', 'C']),
  life: z.string(),
  part: z.enum([...ownerParts, 'approver']),
  /** Whether deactivating the person opens an ownership gap, a duty of the site's managers. */
  opensGap: z.boolean(),
});
export type Responsibility = z.infer<typeof responsibility>;

const exampleHandover: Handover = {
  id: 4,
  siteId: 1,
  siteName: 'Tarnby',
  siteZone: 'Europe/Copenhagen',
  softSensorId: 1,
  tagName: 'TY-1402',
  name: 'Crown interior temperature',
  part: 'owner',
  from: { id: 3, name: 'Marco Castellane' },
  to: { id: 4, name: 'Jun Brightwell' },
  proposedAt: '2026-11-30T08:00:00.000Z',
  proposedBy: { id: 3, name: 'Marco Castellane' },
  reason: 'Moves to the kilns in January',
  answer: null,
  answeredAt: null,
  answeredBy: null,
  answerReason: '',
  mayAnswer: false,
  mayWithdraw: true,
};

export const ownership = {
  'ownership.history': endpoint({
    method: 'GET',
    path: '/soft-sensors/:softSensorId/ownership',
    kind: 'json',
    summary:
      'Who looked after a soft sensor, newest first; what is missing; the offers to hand over that wait',
    access: { may: 'site.view', on: 'softSensor' },
    params: ids('softSensorId'),
    reply: z.object({
      rows: z.array(ownershipEntry),
      gaps: z.array(z.enum(gapCodes)),
      waiting: z.array(handover),
      /** Whether the person who asks may offer each part to somebody else; an engineer may always name themself. */
      mayOffer: z.boolean(),
      mayNameSelf: z.boolean(),
    }),
    example: {
      rows: [
        {
          from: '2026-06-02T08:00:00.000Z',
          until: null,
          owner: { id: 3, name: 'Marco Castellane' },
          deputy: { id: 4, name: 'Jun Brightwell' },
          approver: { id: 5, name: 'Ines Okafor-Lund' },
          recordedBy: { id: 3, name: 'Marco Castellane' },
          reason: '',
        },
      ],
      gaps: [],
      waiting: [exampleHandover],
      mayOffer: true,
      mayNameSelf: true,
    },
  }),
  'handovers.propose': endpoint({
    method: 'POST',
    path: '/soft-sensors/:softSensorId/handovers',
    kind: 'json',
    summary: 'Offer the part of owner or deputy to a successor; naming oneself takes effect at once',
    access: { may: 'softSensor.nameOwner', on: 'softSensor' },
    params: ids('softSensorId'),
    body: z.object({
      part: z.enum(ownerParts),
      toId: idNumber,
      reason: shortText('why it changes hands', 400),
    }),
    reply: handover,
    example: exampleHandover,
  }),
  'handovers.answer': endpoint({
    method: 'POST',
    path: '/handovers/:handoverId/answer',
    kind: 'json',
    summary: 'Accept or decline what is handed over; only by the successor',
    access: { may: 'softSensor.nameOwner', on: 'handover' },
    params: ids('handoverId'),
    body: z
      .object({
        answer: z.enum(['accepted', 'declined']),
        reason: longText.max(400, 'Keep the reason under 400 characters.'),
      })
      .refine(({ answer, reason }) => answer === 'accepted' || reason !== '', {
        path: ['reason'],
        message: 'Write why you decline, so that somebody else can be asked.',
      }),
    reply: handover,
    example: {
      ...exampleHandover,
      answer: 'accepted',
      answeredAt: '2026-12-01T06:12:00.000Z',
      answeredBy: exampleHandover.to,
      mayWithdraw: false,
    },
  }),
  'handovers.withdraw': endpoint({
    method: 'DELETE',
    path: '/handovers/:handoverId',
    kind: 'json',
    summary: 'Take back an offer that nobody answered yet',
    access: { may: 'softSensor.nameOwner', on: 'handover' },
    params: ids('handoverId'),
    reply: handover,
    example: { ...exampleHandover, answer: 'withdrawn', mayWithdraw: false },
  }),
  'handovers.waiting': endpoint({
    method: 'GET',
    path: '/handovers',
    kind: 'json',
    summary:
      'Offers that wait: those I must answer, and those I made or gave away; and what was declined lately',
    access: 'self',
    reply: z.object({
      toAnswer: z.array(handover),
      offered: z.array(handover),
      /** Offers of mine that were declined in the last 30 days, where none followed. */
      declined: z.array(handover),
    }),
    example: { toAnswer: [], offered: [exampleHandover], declined: [] },
  }),
  'people.responsibilities': endpoint({
    method: 'GET',
    path: '/people/:personId/responsibilities',
    kind: 'json',
    summary:
      'Soft sensors that a person owns, deputises for or approves; to be seen before deactivating them',
    access: { may: 'company.administer', on: 'company' },
    params: ids('personId'),
    reply: z.object({
      rows: z.array(responsibility),
      /** Open duties that were given to this person by name. */
      assignedDuties: z.number().int(),
    }),
    example: {
      rows: [
        {
          softSensorId: 1,
          siteId: 1,
          siteName: 'Tarnby',
          tagName: 'TY-1402',
          name: 'Crown interior temperature',
          importanceClass: 'A',
          life: 'in-service',
          part: 'owner',
          opensGap: true,
        },
      ],
      assignedDuties: 0,
    },
  }),
};
