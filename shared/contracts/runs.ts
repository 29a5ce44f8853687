import { z } from 'zod';
import { endpoint, idNumber, ids, isoInstant, nothing } from './endpoint.ts';
import { problem } from './errors.ts';

export const run = z.object({
  id: idNumber,
  siteId: idNumber,
  kind: z.enum(['history-import', 'fit', 'replay', 'estimate']),
  subjectId: idNumber.nullable(),
  state: z.enum(['waiting', 'running', 'done', 'failed', 'cancelled']),
  done: z.number().int(),
  total: z.number().int().nullable(),
  problem: problem.nullable(),
  result: z.record(z.string(), z.unknown()).nullable(),
  createdAt: isoInstant,
  startedAt: isoInstant.nullable(),
  finishedAt: isoInstant.nullable(),
});
export type Run = z.infer<typeof run>;

const exampleRun: Run = {
  id: 12,
  siteId: 1,
  kind: 'replay',
  subjectId: 4,
  state: 'running',
  done: 124_000,
  total: 320_000,
  problem: null,
  result: null,
  createdAt: '2026-11-30T07:00:00.000Z',
  startedAt: '2026-11-30T07:00:01.000Z',
  finishedAt: null,
};

export const runs = {
  'runs.get': endpoint({
    method: 'GET',
    path: '/runs/:runId',
    kind: 'json',
    summary: 'Progress, error or result of long work',
    access: { may: 'site.view', on: 'run' },
    params: ids('runId'),
    reply: run,
    example: exampleRun,
  }),
  'runs.cancel': endpoint({
    method: 'POST',
    path: '/runs/:runId/cancel',
    kind: 'json',
    summary: 'Ask long work to stop; what was finished stays',
    access: { may: 'softSensor.replay', on: 'run' },
    params: ids('runId'),
    body: nothing,
    reply: run,
    example: exampleRun,
  }),
};
