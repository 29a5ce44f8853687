import { AppError, toProblem } from '../../../shared/contracts/errors.ts';
import type { ComputeContext } from '../estimates/context.ts';
import { finishRun, reportProgress, startRun } from './repo.ts';

/** What long work gets: a way to say how far it is, which stops it when somebody asked for that. */
export interface Progress {
  report(done: number, total?: number): Promise<void>;
}

/**
 * Carries out long work under its row in `runs`. An AppError ends it with a sentence for the person; anything else is
 * a fault of ours: told as such, logged, and thrown on so that the queue tries again.
 */
export async function carryOut(
  context: ComputeContext,
  runId: number,
  work: (progress: Progress) => Promise<Record<string, unknown>>,
): Promise<void> {
  await startRun(context.db, runId, context.clock());
  const progress: Progress = {
    async report(done, total) {
      if (await reportProgress(context.db, runId, done, total)) {
        throw new AppError('cancelled', 'Stopped as asked. What was finished stays.');
      }
    },
  };
  try {
    await progress.report(0);
    const result = await work(progress);
    await finishRun(context.db, runId, context.clock(), { state: 'done', result });
  } catch (error) {
    const known =
      error instanceof AppError
        ? error
        : new AppError('unexpected', 'This stopped because of a fault on our side. It is tried again.');
    const state = known.code === 'cancelled' ? 'cancelled' : 'failed';
    await finishRun(context.db, runId, context.clock(), { state, problem: toProblem(known) });
    if (!(error instanceof AppError)) throw error;
  }
}
