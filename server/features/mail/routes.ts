import { simpleParser } from 'mailparser';
import { AppError } from '../../../shared/contracts/errors.ts';
import { mail } from '../../../shared/contracts/mail.ts';
import type { Context } from '../../context.ts';
import type { Config } from '../../env.ts';
import { routesOf } from '../../http/front-door.ts';
import { toWire } from '../../http/wire.ts';
import { findLocalMail, listMails } from './repo.ts';

export const mailRoutes = (context: Context) =>
  routesOf(context, mail, {
    'mail.list': async ({ query }) => {
      const { rows, total } = await listMails(context.db, query);
      return { rows: toWire(rows), total, server: serverName(context.config) };
    },
    'mail.read': async ({ params }) => {
      const found = await findLocalMail(context.db, params.localMailId);
      if (!found) throw new AppError('not-found', 'This message is no longer kept.');
      const parsed = await simpleParser(found.raw);
      return {
        id: found.id,
        receivedAt: found.receivedAt.toISOString(),
        from: found.fromAddress,
        to: found.toAddress,
        subject: found.subject,
        text: parsed.text ?? '',
        html: parsed.html || null,
      };
    },
  });

/** 'local', or host and port without user name and password. */
function serverName({ localMail, smtpUrl }: Config): string {
  return localMail || !smtpUrl ? 'local' : new URL(smtpUrl).host;
}
