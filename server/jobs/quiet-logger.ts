import { Logger } from 'graphile-worker';
import type { Context } from '../context.ts';

/** The queue's own messages go to our log at its level; a failed job is a warning there. */
export function quietLogger(context: Context): Logger {
  return new Logger(() => (level, message, meta) => {
    const levels = { error: 'warn', warning: 'warn', info: 'debug', debug: 'debug' } as const;
    context.log[levels[level as keyof typeof levels] ?? 'debug']({ err: meta?.error }, message);
  });
}
