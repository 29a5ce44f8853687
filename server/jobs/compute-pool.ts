import path from 'node:path';
import { fileURLToPath } from 'node:url';
import { Piscina } from 'piscina';
import type { Config } from '../env.ts';
import type { ComputeTasks } from './estimate-worker.ts';

export type ComputeTask = keyof ComputeTasks;

/** Runs heavy computation in worker threads with database connections of their own, so that pages stay quick. */
export interface ComputePool {
  run<T extends ComputeTask>(task: T, payload: Parameters<ComputeTasks[T]>[1], now: Date): Promise<void>;
  stop(): Promise<void>;
}

const here = fileURLToPath(import.meta.url);
const fromSource = here.endsWith('.ts');

export function createComputePool(config: Config): ComputePool {
  let threads: Piscina | undefined;
  const start = () =>
    new Piscina({
      filename: path.join(path.dirname(here), fromSource ? 'estimate-worker.ts' : 'estimate-worker.js'),
      maxThreads: 2,
      minThreads: 0,
      idleTimeout: 30_000,
      // Node 20 runs no TypeScript by itself; the build has JavaScript.
      execArgv: fromSource ? ['--import', 'tsx'] : [],
      workerData: { databaseUrl: config.databaseUrl, publicUrl: config.publicUrl, logLevel: config.logLevel },
    });
  return {
    async run(task, payload, now) {
      threads ??= start();
      await threads.run({ task, payload, nowMs: now.getTime() });
    },
    async stop() {
      await threads?.destroy();
    },
  };
}
