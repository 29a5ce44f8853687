import type { Context } from '../../context.ts';

/** What computation needs of the context; a worker thread has this much. */
export type ComputeContext = Pick<Context, 'db' | 'pool' | 'log' | 'clock'>;
