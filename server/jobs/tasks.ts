import type { JobHelpers, TaskList } from 'graphile-worker';
import type { Context } from '../context.ts';
import { sendQueuedMail } from '../features/mail/send.ts';
import { cleanUp } from './clean-up.ts';
import type { JobName, Jobs } from './queue.ts';
import { unlockDeadWorkers } from './unlock-dead-workers.ts';

type Task<N extends JobName> = (context: Context, payload: Jobs[N], helpers: JobHelpers) => Promise<void>;

/** One function for each kind of job. */
const tasks: { [N in JobName]?: Task<N> } = {
  'send-mail': sendQueuedMail,
  'unlock-dead-workers': unlockDeadWorkers,
  'clean-up': cleanUp,
};

export function taskList(context: Context): TaskList {
  return Object.fromEntries(
    Object.entries(tasks).map(([name, task]) => [
      name,
      (payload: unknown, helpers: JobHelpers) => (task as Task<JobName>)(context, payload as never, helpers),
    ]),
  );
}
