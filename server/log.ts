import { DrizzleQueryError } from 'drizzle-orm';
import pino, { type Logger } from 'pino';

/** The log, as JSON lines. Errors are told without the values of a query or the state of a connection: those may be secret. */
export const createLog = (level: string): Logger => pino({ level, serializers: { err: describeError } });

function describeError(error: unknown): Record<string, unknown> {
  const cause = error instanceof DrizzleQueryError && error.cause instanceof Error ? error.cause : error;
  if (!(cause instanceof Error)) return { message: String(cause) };
  const query = error instanceof DrizzleQueryError ? { query: error.query } : {};
  const { code } = cause as { code?: string };
  return { type: cause.name, message: cause.message, code, ...query, stack: cause.stack };
}
