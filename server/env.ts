import { z } from 'zod';

const truthy = z
  .enum(['1', '0', ''])
  .default('')
  .transform((value) => value === '1');

const schema = z.object({
  NODE_ENV: z.string().default('production'),
  DATABASE_URL: z.string().min(1, 'says where PostgreSQL is; `npm start` sets it'),
  /** For LISTEN, advisory locks and the queue where DATABASE_URL goes through a connection pooler. */
  DATABASE_DIRECT_URL: z.string().optional(),
  HOST: z.string().default('127.0.0.1'),
  PORT: z.coerce.number().int().min(0).max(65_535).default(4600),
  /** Address that people use, for links in mails. */
  PUBLIC_URL: z.url().optional(),
  /** SMTP server; without it a local one takes the mail in and administrators read it in the application. */
  SMTP_URL: z.string().optional(),
  MAIL_FROM: z.string().default('Cupel <cupel@localhost>'),
  /** Hops of reverse proxies whose X-Forwarded-For is believed. */
  TRUST_PROXY: z.coerce.number().int().min(0).max(5).default(0),
  LOG_LEVEL: z.enum(['debug', 'info', 'warn', 'error', 'silent']).default('warn'),
  CUPEL_OWN_CLUSTER: truthy,
  CUPEL_EMPTY: truthy,
});

export interface Config {
  production: boolean;
  databaseUrl: string;
  databaseDirectUrl: string;
  host: string;
  port: number;
  publicUrl: string;
  smtpUrl: string | undefined;
  /** No SMTP server was named: the local one keeps the mail, to be read in the application. */
  localMail: boolean;
  mailFrom: string;
  trustProxy: number;
  logLevel: string;
  /** The demo company, whose passwords are published, is only ever put into the cluster that `npm start` made. */
  demoAllowed: boolean;
}

/** The only reader of the environment. A setting that can't be used is named in a sentence. */
export function readConfig(environment: Record<string, string | undefined>): Config {
  const parsed = schema.safeParse(environment);
  if (!parsed.success) {
    const first = parsed.error.issues[0]!;
    throw new Error(`The setting ${first.path.join('.')} can’t be used: ${first.message}.`);
  }
  const env = parsed.data;
  return Object.freeze({
    production: env.NODE_ENV === 'production',
    databaseUrl: env.DATABASE_URL,
    databaseDirectUrl: env.DATABASE_DIRECT_URL ?? env.DATABASE_URL,
    host: env.HOST,
    port: env.PORT,
    publicUrl: (env.PUBLIC_URL ?? `http://${env.HOST}:${env.PORT}`).replace(/\/$/, ''),
    smtpUrl: env.SMTP_URL,
    localMail: env.SMTP_URL === undefined,
    mailFrom: env.MAIL_FROM,
    trustProxy: env.TRUST_PROXY,
    logLevel: env.LOG_LEVEL,
    demoAllowed: env.CUPEL_OWN_CLUSTER && !env.CUPEL_EMPTY,
  });
}
