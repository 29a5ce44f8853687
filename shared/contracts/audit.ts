import { z } from 'zod';
import { endpoint, idNumber, idText, isoInstant } from './endpoint.ts';
import { pageQuery, paged } from './paging.ts';

export const auditEntry = z.object({
  id: idNumber,
  at: isoInstant,
  siteId: idNumber.nullable(),
  siteName: z.string().nullable(),
  personName: z.string(),
  fromAddress: z.string(),
  action: z.string(),
  entity: z.string(),
  entityId: z.string(),
  entityName: z.string(),
  before: z.record(z.string(), z.unknown()).nullable(),
  after: z.record(z.string(), z.unknown()).nullable(),
  reason: z.string(),
  requestId: z.string(),
});
export type AuditEntry = z.infer<typeof auditEntry>;

export const audit = {
  'audit.list': endpoint({
    method: 'GET',
    path: '/audit',
    kind: 'json',
    summary:
      'Who did what, newest first: of the sites where the person may read it, and for administrators of the company',
    access: { may: 'audit.read', on: 'sites' },
    query: z.object({
      ...pageQuery,
      siteId: idText.optional(),
      entity: z.string().max(40).optional(),
      entityId: z.string().max(40).optional(),
      text: z.string().max(80).optional(),
    }),
    reply: paged(auditEntry),
    example: { rows: [], total: 0 },
  }),
};
