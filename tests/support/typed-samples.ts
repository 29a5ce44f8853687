import { randomUUID } from 'node:crypto';
import { problemOf, type Laboratory } from './laboratory.ts';

/** A value as it is typed at the sample point of a laboratory, each with a key of its own. */
export const entryAt = (lab: Laboratory, own: object = {}) => ({
  entryKey: randomUUID(),
  samplePointId: lab.samplePointId,
  methodId: lab.methodId,
  sampleNumber: '',
  takenAt: '2026-12-01T22:50:00.000Z',
  value: '1482,5',
  unit: '°C',
  note: '',
  ...own,
});

/** What is said beside each field. */
export const fieldsOf = (answer: { body: unknown }): Record<string, string> =>
  Object.fromEntries((problemOf(answer).fields ?? []).map(({ path, message }) => [path, message]));
