import { type ParsedMail, simpleParser } from 'mailparser';
import { SMTPServer } from 'smtp-server';

/** A reply that refuses: its code, 4xx for now or 5xx for good, and its words. */
export interface Refusal {
  code: number;
  words: string;
}

/** What the server accepted, by its own log. */
export interface Accepted {
  to: string;
  raw: Buffer;
  /** By the clock that the server was given, milliseconds since 1970. */
  at: number;
}

export interface MailServer {
  url: string;
  log: Accepted[];
  /** Called when a message is in the log, before its sender is told so. */
  onAccepted: () => void;
  /** Messages accepted for an address, oldest first. */
  lettersTo(address: string): Promise<ParsedMail[]>;
  stop(): Promise<void>;
}

export type Moment = 'sender' | 'recipient' | 'data';

/** A mail server on loopback that may refuse at any moment, after the message was sent too, and logs what it accepts. */
export async function startMailServer(
  refuse: (moment: Moment, address: string) => Refusal | null = () => null,
  clock: () => number = Date.now,
): Promise<MailServer> {
  const made = { log: [] as Accepted[], onAccepted: () => {} };
  const answer = (moment: Moment, address: string, done: (error?: Error | null) => void) => {
    const refusal = refuse(moment, address);
    if (!refusal) return done();
    done(Object.assign(new Error(refusal.words), { responseCode: refusal.code }));
  };
  const server = new SMTPServer({
    authOptional: true,
    disabledCommands: ['STARTTLS', 'AUTH'],
    onMailFrom: ({ address }, _session, done) => answer('sender', address, done),
    onRcptTo: ({ address }, _session, done) => answer('recipient', address, done),
    onData(stream, session, done) {
      const pieces: Buffer[] = [];
      stream.on('data', (piece: Buffer) => pieces.push(piece));
      stream.on('end', () => {
        const to = session.envelope.rcptTo[0]!.address;
        answer('data', to, (error) => {
          if (!error) {
            made.log.push({ to, raw: Buffer.concat(pieces), at: clock() });
            made.onAccepted();
          }
          done(error);
        });
      });
    },
  });
  // A killed worker leaves its connection half way; that is no fault of the server's.
  server.on('error', () => {});
  await new Promise<void>((resolve) => server.listen(0, '127.0.0.1', resolve));
  const { port } = server.server.address() as { port: number };
  return Object.assign(made, {
    url: `smtp://127.0.0.1:${port}/?ignoreTLS=true`,
    lettersTo: (address: string) =>
      Promise.all(made.log.filter(({ to }) => to === address).map(({ raw }) => simpleParser(raw))),
    stop: () => new Promise<void>((resolve) => server.close(() => resolve())),
  });
}
