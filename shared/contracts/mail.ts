import { z } from 'zod';
import { endpoint, idNumber, ids, isoInstant } from './endpoint.ts';
import { pageQuery, paged } from './paging.ts';

export const mailRow = z.object({
  id: idNumber,
  to: z.string(),
  template: z.string(),
  subject: z.string().nullable(),
  state: z.enum(['waiting', 'sent', 'failed']),
  attempts: z.number().int(),
  lastError: z.string().nullable(),
  createdAt: isoInstant,
  sentAt: isoInstant.nullable(),
  /** Set where the local mail server took it in, so that it can be read here. */
  localMailId: idNumber.nullable(),
});
export type MailRow = z.infer<typeof mailRow>;

export const localMail = z.object({
  id: idNumber,
  receivedAt: isoInstant,
  from: z.string(),
  to: z.string(),
  subject: z.string(),
  text: z.string(),
  /** null where the message is plain text only. */
  html: z.string().nullable(),
});
export type LocalMail = z.infer<typeof localMail>;

export const mail = {
  'mail.list': endpoint({
    method: 'GET',
    path: '/mails',
    kind: 'json',
    summary: 'Sent and waiting mail, newest first',
    access: { may: 'mail.read', on: 'company' },
    query: z.object(pageQuery),
    reply: paged(mailRow).extend({ server: z.string() }),
    example: { rows: [], total: 0, server: 'local' },
  }),
  'mail.read': endpoint({
    method: 'GET',
    path: '/local-mails/:localMailId',
    kind: 'json',
    summary: 'A message as the local mail server took it in',
    access: { may: 'mail.read', on: 'company' },
    params: ids('localMailId'),
    reply: localMail,
    example: {
      id: 1,
      receivedAt: '2026-12-01T06:00:00.000Z',
      from: 'cupel@localhost',
      to: 'tove.halbrook@tarnby.example',
      subject: 'Set your password for Cupel',
      text: 'Hello Tove',
      html: '<p>Hello Tove</p>',
    },
  }),
};
