import type { Baseline } from '../contracts/calibration-evidence.ts';

/** What may restart the errors of a soft sensor; instants, null where there was none. */
export interface BaselineFacts {
  /** Approved revisions in force by now, the first one first; `fitTo`: end of the period it was fitted on. */
  revisions: readonly { effectiveFrom: Date; fitTo: Date | null }[];
  /** The last calibration in force that changed the correction. */
  correctedAt: Date | null;
  /** The last event that restarts errors. */
  event: { kind: string; at: Date } | null;
}

/**
 * Since when errors count: the latest of the present revision, the last change of the correction and the last event. For
 * a first revision only samples after the period that it was fitted on count, since a model is not proven by what it was
 * made from.
 */
export function baselineOf({ revisions, correctedAt, event }: BaselineFacts): Baseline {
  const candidates: { code: Baseline['code']; at: Date; eventKind: string | null }[] = [];
  const inForce = revisions.at(-1);
  if (inForce && revisions.length > 1) {
    candidates.push({ code: 'revision', at: inForce.effectiveFrom, eventKind: null });
  } else if (inForce?.fitTo) candidates.push({ code: 'training', at: inForce.fitTo, eventKind: null });
  if (correctedAt) candidates.push({ code: 'calibration', at: correctedAt, eventKind: null });
  if (event) candidates.push({ code: 'event', at: event.at, eventKind: event.kind });
  const latest = candidates.reduce<(typeof candidates)[number] | null>(
    (last, one) => (last && last.at >= one.at ? last : one),
    null,
  );
  return latest
    ? { code: latest.code, at: latest.at.toISOString(), eventKind: latest.eventKind }
    : { code: 'beginning', at: null, eventKind: null };
}
