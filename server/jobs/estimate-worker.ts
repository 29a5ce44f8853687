import { workerData } from 'node:worker_threads';
import { createDb, createPool } from '../db/client.ts';
import { createLog } from '../log.ts';
import { computeEstimate } from '../features/estimates/compute.ts';
import type { ComputeContext } from '../features/estimates/context.ts';
import { fitDraft } from '../features/estimates/fit.ts';
import { runReplay } from '../features/estimates/replay.ts';

const tasks = { estimate: computeEstimate, fit: fitDraft, replay: runReplay };
export type ComputeTasks = typeof tasks;

interface Order {
  task: keyof ComputeTasks;
  payload: unknown;
  nowMs: number;
}

const { databaseUrl, logLevel } = workerData as { databaseUrl: string; logLevel: string };
const log = createLog(logLevel);
const pool = createPool(databaseUrl, log, 2);
const db = createDb(pool);

/** Entry of a worker thread: carries out one task at the given time. */
export default async function carryOutTask({ task, payload, nowMs }: Order): Promise<void> {
  const context: ComputeContext = { db, pool, log, clock: () => new Date(nowMs) };
  await tasks[task](context, payload as never);
}
