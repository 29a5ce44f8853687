import type { EndpointSpec } from './endpoint.ts';

/** What can happen to a unit, or to one soft sensor. A turnaround stops a unit as a stop does. */
export const eventKinds = [
  'stop',
  'start',
  'grade-change',
  'turnaround',
  'instrument-replaced',
  'method-change',
] as const;
export type EventKind = (typeof eventKinds)[number];

export const events = {} satisfies Record<string, EndpointSpec>;
