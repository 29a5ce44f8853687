import type pg from 'pg';
import { pairSample, steadyReadings } from '../../../shared/rules/pair-sample.ts';
import type { Tx } from '../../db/client.ts';
import { pairs } from '../../db/schema/index.ts';
import { type RevisionRow, type SensorRow, approvedRevisions } from '../estimates/repo.ts';
import { readSeries } from '../estimates/series.ts';
import { type Stoppage, stoppedSince } from '../events/standing.ts';
import {
  type PairRow,
  type SampleRow,
  addPairs,
  retireOrphanPairs,
  samplesToPair,
  supersedePairs,
} from './repo.ts';

type NewPair = typeof pairs.$inferInsert;

/**
 * Sets every sample that needs it beside the estimate of its moment: takenAt minus the transport delay. A pair is
 * frozen; where inputs changed later a new pair supersedes it, and decisions keep the pairs they were made on.
 */
export async function pairSamples(
  tx: Tx,
  client: pg.PoolClient,
  sensor: SensorRow,
  dirtyFrom: Date | null,
  now: Date,
  stoppages: readonly Stoppage[],
): Promise<void> {
  await retireOrphanPairs(tx, sensor, now);
  const found = await samplesToPair(tx, sensor, dirtyFrom);
  if (found.length === 0) return;
  const revisions = await approvedRevisions(tx, sensor.siteId, sensor.id);
  const makePair = await pairMaker(
    client,
    sensor,
    revisions,
    found.map(({ sample }) => sample),
    now,
    stoppages,
  );
  const made: NewPair[] = [];
  const replaced: number[] = [];
  for (const { sample, pair } of found) {
    const next = makePair(sample);
    if (pair && sameFigures(pair, next)) continue;
    if (pair) replaced.push(pair.id);
    made.push(next);
  }
  await supersedePairs(tx, sensor.siteId, replaced, now);
  await addPairs(tx, made);
}

async function pairMaker(
  client: pg.PoolClient,
  sensor: SensorRow,
  revisions: readonly RevisionRow[],
  samples: readonly SampleRow[],
  now: Date,
  stoppages: readonly Stoppage[],
): Promise<(sample: SampleRow) => NewPair> {
  const times = samples.flatMap((sample) =>
    sample.takenAt ? [sample.takenAt.getTime() - sensor.transportDelayMs] : [],
  );
  const margin =
    holdLimitOf(revisions.at(-1)) +
    sensor.pairingWindowMs +
    steadyReadings * stepOf(revisions.at(-1), sensor);
  const longest = samples.reduce((most, { compositeMs }) => Math.max(most, compositeMs ?? 0), 0);
  const series = await readSeries(
    client,
    { siteId: sensor.siteId, tagId: sensor.estimateTagId },
    new Date(Math.min(...times, now.getTime()) - margin - longest),
    new Date(Math.max(...times, 0) + margin),
  );
  return (sample) => {
    const takenMs = sample.takenAt?.getTime() ?? Date.parse(`${sample.takenOn}T12:00:00Z`);
    const revision = revisionAt(revisions, takenMs);
    const base = {
      siteId: sensor.siteId,
      softSensorId: sensor.id,
      sampleId: sample.id,
      revisionId: revision?.row.id ?? null,
      takenAt: new Date(takenMs),
      reportedAt: sample.reportedAt,
      reference: sample.value,
      origin: revision?.recorded ? ('recorded' as const) : ('replayed' as const),
      computedAt: now,
    };
    const paired = pairSample(series, toPair(sample), { ...sensor, holdLimitMs: holdLimitOf(revision?.row) });
    const { sd, ...rest } = paired;
    const stopped = isStopped(stoppages, takenMs, sample.compositeMs ?? 0);
    return { ...base, ...rest, estimateSd: sd, ...(stopped ? { notCounted: 'unit-stopped' } : {}) };
  };
}

/** Share of a composite's span during which the unit may have stood. */
const mostStopped = 0.1;

/** Did the unit stand when the sample was taken, or during more than a tenth of a composite's span? */
function isStopped(stoppages: readonly Stoppage[], takenMs: number, compositeMs: number): boolean {
  if (compositeMs === 0) return stoppedSince(stoppages, new Date(takenMs)) !== null;
  const stood = stoppages.reduce((sum, { from, to }) => {
    const until = Math.min(to?.getTime() ?? takenMs, takenMs);
    return sum + Math.max(0, until - Math.max(from.getTime(), takenMs - compositeMs));
  }, 0);
  return stood > mostStopped * compositeMs;
}

/** A sample as the pairing rule sees it. */
export const toPair = (sample: SampleRow) => ({
  takenMs: sample.takenAt?.getTime() ?? null,
  compositeMs: sample.compositeMs,
  value: sample.value,
  censored: sample.qualifier !== null,
  held: sample.heldSince !== null,
});

const holdLimitOf = (revision: RevisionRow | undefined): number => revision?.model.holdLimitMs ?? 0;

/** Usual distance of two readings of the estimate: the steady-state test looks some of them back. */
function stepOf(revision: RevisionRow | undefined, sensor: SensorRow): number {
  if (!sensor.steadyStateGate || !revision) return 0;
  return revision.model.form === 'regression' ? revision.model.stepMs : revision.model.holdLimitMs;
}

/** The revision in force at an instant; before the first one, the first, whose estimate there was computed afterwards. */
function revisionAt(
  revisions: readonly RevisionRow[],
  atMs: number,
): { row: RevisionRow; recorded: boolean } | null {
  const inForce = revisions.findLast((revision) => revision.effectiveFrom!.getTime() <= atMs);
  if (inForce) return { row: inForce, recorded: true };
  return revisions[0] ? { row: revisions[0], recorded: false } : null;
}

function sameFigures(old: PairRow, next: NewPair): boolean {
  return (
    old.estimate === (next.estimate ?? null) &&
    old.reference === next.reference &&
    old.notCounted === (next.notCounted ?? null) &&
    old.revisionId === next.revisionId &&
    old.takenAt.getTime() === (next.takenAt as Date).getTime()
  );
}
