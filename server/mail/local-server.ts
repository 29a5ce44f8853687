import { simpleParser } from 'mailparser';
import { SMTPServer } from 'smtp-server';
import type { Context } from '../context.ts';
import { localMails } from '../db/schema/index.ts';

export interface LocalMailServer {
  url: string;
  stop(): Promise<void>;
}

const largestMessage = 5 * 1024 * 1024;

/** A mail server on loopback that keeps what it takes in, for administrators to read: used while no SMTP_URL is set. */
export async function startLocalMailServer(context: Context): Promise<LocalMailServer> {
  const server = new SMTPServer({
    authOptional: true,
    disabledCommands: ['STARTTLS', 'AUTH'],
    size: largestMessage,
    onData(stream, session, done) {
      const pieces: Buffer[] = [];
      stream.on('data', (piece: Buffer) => pieces.push(piece));
      stream.on('end', () => {
        const to = session.envelope.rcptTo.map((recipient) => recipient.address).join(', ');
        keep(context, Buffer.concat(pieces), to).then(() => done(), done);
      });
    },
  });
  server.on('error', (error) => context.log.warn({ err: error }, 'the local mail server reports an error'));
  await new Promise<void>((resolve, reject) => {
    server.once('error', reject);
    server.listen(0, '127.0.0.1', resolve);
  });
  const address = server.server.address() as { port: number };
  return {
    url: `smtp://127.0.0.1:${address.port}/?ignoreTLS=true`,
    stop: () => new Promise((resolve) => server.close(resolve)),
  };
}

async function keep(context: Context, raw: Buffer, to: string): Promise<void> {
  const parsed = await simpleParser(raw);
  await context.db.insert(localMails).values({
    receivedAt: context.clock(),
    messageId: parsed.messageId ?? '',
    fromAddress: parsed.from?.text ?? '',
    toAddress: to,
    subject: parsed.subject ?? '',
    raw,
  });
}
