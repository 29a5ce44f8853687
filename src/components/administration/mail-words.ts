import type { MailRow } from '../../../shared/contracts/mail.ts';
import { formatInstant, plural } from '../../../shared/rules/format.ts';

const templates: Record<string, string> = {
  'set-password': 'Link to set a first password',
  'reset-password': 'Link to set a new password',
};

/** What a mail is about: its subject once written, else what it will be. */
export const aboutWords = (row: MailRow): string =>
  row.subject ?? templates[row.template] ?? row.template.replaceAll('-', ' ');

/** "sent 29 Nov 2026 14:00", "waiting", "failed after 3 attempts". */
export function stateWords(row: MailRow, zone: string): string {
  if (row.state === 'sent') return `sent ${formatInstant(row.sentAt!, zone)}`;
  if (row.state === 'waiting') return 'waiting';
  return row.attempts === 0 ? 'not sent' : `failed after ${plural(row.attempts, 'attempt')}`;
}

/** The finding of the page: where mail goes. */
export function mailHeadline(server: string): string {
  return server === 'local' ? 'Mail stays here: no mail server is set.' : `Mail goes out through ${server}.`;
}

/** What of the mails shown has not gone out; blank where all has. */
export function mailSubline(rows: readonly Pick<MailRow, 'state'>[]): string {
  const count = (state: MailRow['state']) => rows.filter((row) => row.state === state).length;
  const [waiting, failed] = [count('waiting'), count('failed')];
  const parts = [
    ...(failed > 0 ? [`${failed} could not be sent`] : []),
    ...(waiting > 0 ? [`${waiting} ${waiting === 1 ? 'waits' : 'wait'}`] : []),
  ];
  return parts.length === 0 ? '' : `Of those shown, ${parts.join(' and ')}.`;
}
