import type { Baseline, EvidenceReply } from '../../../shared/contracts/calibration-evidence.ts';
import { baselineOf } from '../../../shared/rules/baseline.ts';
import { correctionAt } from '../../../shared/rules/correction-steps.ts';
import { fewestErrors } from '../../../shared/rules/health.ts';
import { gatherEvidence } from '../../../shared/rules/recalibration.ts';
import type { Queryable } from '../../db/client.ts';
import { type RevisionRow, type SensorRow, approvedRevisions, methodOf } from '../estimates/repo.ts';
import { lastBaselineEvent } from '../events/standing.ts';
import { allowedAt, toPairedError } from '../judging/figures.ts';
import { standingPairs } from '../judging/repo.ts';
import { correctionSteps, lastCorrectedAt } from './repo.ts';

/** Since when the errors of a soft sensor count, at an instant; `inForce`: approved revisions by then. */
export async function baselineAt(
  db: Queryable,
  sensor: SensorRow,
  inForce: readonly RevisionRow[],
  now: Date,
): Promise<Baseline> {
  return baselineOf({
    revisions: inForce.map(({ effectiveFrom, fit }) => ({
      effectiveFrom: effectiveFrom!,
      fitTo: fit ? new Date(fit.to) : null,
    })),
    correctedAt: await lastCorrectedAt(db, sensor.siteId, sensor.id, now),
    event: await lastBaselineEvent(db, sensor, now),
  });
}

/** 95 % limit of the difference of two results to the SD of one: r = 2.77 s (ISO 5725-6 rounds to 2.8). */
const limitToSd = 1.96 * Math.SQRT2;

/** The reply to show, and the pairs behind it. */
export async function evidenceNow(
  db: Queryable,
  sensor: SensorRow,
  now: Date,
): Promise<{ reply: EvidenceReply; pairIds: number[]; revision: RevisionRow | null }> {
  const inForce = (await approvedRevisions(db, sensor.siteId, sensor.id)).filter(
    (revision) => revision.effectiveFrom! <= now,
  );
  const revision = inForce.at(-1) ?? null;
  const baseline = await baselineAt(db, sensor, inForce, now);
  const steps = await correctionSteps(db, sensor.siteId, sensor.id);
  const since = baseline.at === null ? new Date(0) : new Date(baseline.at);
  const rows = await standingPairs(db, sensor, { from: since, to: now });
  const reported = rows.filter(({ pair }) => pair.reportedAt <= now).slice(-mostSamples);
  const counted = reported.filter(({ pair }) => pair.notCounted === null);
  const notCounted = countReasons(reported.map(({ pair }) => pair.notCounted));
  const refusal = (reason: Extract<EvidenceReply, { ok: false }>['reason']) => ({
    reply: {
      ok: false as const,
      reason,
      counted: counted.length,
      needed: fewestErrors,
      baseline,
      notCounted,
    },
    pairIds: [],
    revision,
  });
  if (!revision) return refusal('no-model');
  if (sensor.samplePointId === null) return refusal('no-sample-point');
  const method = await methodOf(db, sensor);
  const precision = method?.repeatability ?? method?.reproducibility ?? null;
  const found = gatherEvidence(
    counted.map(({ pair }) => ({
      takenMs: pair.takenAt.getTime(),
      raw: pair.estimate!,
      reference: pair.reference,
      allowed: allowedAt(sensor, pair.reference),
    })),
    {
      current: correctionAt(steps, now.getTime()),
      baseline,
      labSd: precision === null ? null : precision / limitToSd,
      residualSd: revision.model.residualSd,
      closedLoop: sensor.consumers.some(({ kind }) => kind === 'closed-loop'),
      notCounted,
    },
  );
  if (!found.ok) return refusal(whyTooFew(notCounted, counted.length));
  const errors = counted.map(({ pair, sampleNumber }) => toPairedError(sensor, pair, sampleNumber, steps));
  return {
    reply: { ok: true, evidence: found.evidence, errors },
    pairIds: counted.map(({ pair }) => pair.id),
    revision,
  };
}

/** Samples looked at: a trend is judged on at most the last 400. */
const mostSamples = 400;

function whyTooFew(
  notCounted: readonly { code: string; count: number }[],
  counted: number,
): 'too-few-samples' | 'only-censored' | 'only-held' {
  const all = counted + notCounted.reduce((sum, { count }) => sum + count, 0);
  const share = (code: string) => notCounted.find((one) => one.code === code)?.count ?? 0;
  if (all > 0 && share('censored') === all) return 'only-censored';
  return all > 0 && share('held') === all ? 'only-held' : 'too-few-samples';
}

function countReasons(codes: readonly (string | null)[]): { code: string; count: number }[] {
  const counts = new Map<string, number>();
  for (const code of codes) if (code !== null) counts.set(code, (counts.get(code) ?? 0) + 1);
  return [...counts].map(([code, count]) => ({ code, count })).sort((a, b) => b.count - a.count);
}
