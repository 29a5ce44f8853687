import type { JobHelpers, TaskList } from 'graphile-worker';
import type { Context } from '../context.ts';
import { remind } from '../features/duties/remind.ts';
import { importHistory } from '../features/history/import.ts';
import { rollUp } from '../features/history/roll-up.ts';
import { judgeNow } from '../features/judging/service.ts';
import { queueJudgingOfAll } from '../features/judging/all.ts';
import { sendQueuedMail } from '../features/mail/send.ts';
import { cleanUp } from './clean-up.ts';
import type { JobName, Jobs } from './queue.ts';
import { unlockDeadWorkers } from './unlock-dead-workers.ts';

type Task<N extends JobName> = (context: Context, payload: Jobs[N], helpers: JobHelpers) => Promise<void>;

/** One function for each kind of job. */
const tasks: { [N in JobName]?: Task<N> } = {
  'send-mail': sendQueuedMail,
  'import-history': importHistory,
  'roll-up': rollUp,
  'unlock-dead-workers': unlockDeadWorkers,
  'clean-up': cleanUp,
  remind,
  estimate: (context, payload) => context.compute.run('estimate', payload, context.clock()),
  judge: judgeNow,
  'judge-all': queueJudgingOfAll,
  fit: (context, payload) => context.compute.run('fit', payload, context.clock()),
  replay: (context, payload) => context.compute.run('replay', payload, context.clock()),
};

export function taskList(context: Context): TaskList {
  return Object.fromEntries(
    Object.entries(tasks).map(([name, task]) => [
      name,
      (payload: unknown, helpers: JobHelpers) => (task as Task<JobName>)(context, payload as never, helpers),
    ]),
  );
}
