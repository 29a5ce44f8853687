import nodemailer, { type Transporter } from 'nodemailer';
import type { Config } from '../env.ts';

export interface Letter {
  to: string;
  messageId: string;
  subject: string;
  text: string;
  html: string;
}

const transporters = new Map<string, Transporter>();

/** Hands a message to the SMTP server; returns once the server has accepted it. */
export async function sendLetter(config: Config, smtpUrl: string, letter: Letter): Promise<void> {
  let transporter = transporters.get(smtpUrl);
  if (!transporter) {
    transporter = nodemailer.createTransport({
      url: smtpUrl,
      connectionTimeout: 10_000,
      greetingTimeout: 10_000,
      socketTimeout: 60_000,
    });
    transporters.set(smtpUrl, transporter);
  }
  // No absence note answers a mail that says it was written by a program (RFC 3834).
  const headers = { 'Auto-Submitted': 'auto-generated' };
  await transporter.sendMail({ from: config.mailFrom, headers, ...letter });
}
