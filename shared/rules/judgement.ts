import type { Judgement, PairedError } from '../contracts/judging.ts';
import { biasWithInterval } from '../numerics/bias.ts';
import { ewmaChart } from '../numerics/control-charts.ts';
import { exponentialUpdate } from '../numerics/exponential-update.ts';
import { holdLast } from '../numerics/hold-last.ts';
import { bandFactor } from './band.ts';

/** Design of the EWMA chart on a sheet: λ 0.2 at 3 SD of z, the usual choice to look at (NIST/SEMATECH 6.3.2.4). */
export const ewmaDesign = { lambda: 0.2, width: 3 };

/** Fewest errors whose SD may stand in for one found on held-out samples. */
const fewestForSd = 8;

/**
 * How wrong an estimate was over a set of paired samples, in order of their time. Only counted ones are judged; the
 * others are listed with their reasons. `residualSd`: SD of a single error on held-out samples, if known.
 * All errors are estimate − reference, in the unit of the estimate.
 */
export function judge(
  pairs: readonly PairedError[],
  options: { updateFactor: number; residualSd: number | null },
): Judgement {
  const counted = pairs.filter((pair) => pair.notCounted === null && pair.error !== null);
  const errors = counted.map((pair) => pair.corrected ?? pair.error!);
  const bias = biasWithInterval(errors);
  // What per-sample updating would have given starts from the raw estimate, not from corrections that people made.
  const exponential = exponentialUpdate(
    counted.map((pair) => pair.error!),
    options.updateFactor,
  );
  return {
    bias: bias.ok ? bias : { ok: false, reason: bias.reason, n: errors.length },
    holdLast: heldLast(counted),
    exponential: exponential.ok
      ? { factor: options.updateFactor, n: exponential.n, rmse: exponential.rmse, bias: exponential.bias }
      : null,
    ewma: ewmaOf(errors, options.residualSd ?? (bias.ok && errors.length >= fewestForSd ? bias.sd : null)),
    coverage: coverageOf(counted),
    notCounted: reasonsOf(pairs),
  };
}

function heldLast(counted: readonly PairedError[]): Judgement['holdLast'] {
  const held = holdLast({
    takenAt: counted.map((pair) => Date.parse(pair.takenAt)),
    reportedAt: counted.map((pair) => Date.parse(pair.reportedAt)),
    value: counted.map((pair) => pair.reference),
  });
  return held.ok ? { n: held.n, rmse: held.rmse, bias: held.bias } : null;
}

function ewmaOf(errors: readonly number[], sd: number | null): Judgement['ewma'] {
  if (sd === null || !(sd > 0)) return null;
  const chart = ewmaChart(errors, { sd, ...ewmaDesign });
  return chart.ok ? { ...ewmaDesign, sd, points: chart.points } : null;
}

function coverageOf(counted: readonly PairedError[]): Judgement['coverage'] {
  const banded = counted.filter((pair) => pair.estimateSd !== null);
  if (banded.length === 0) return null;
  const held = banded.filter(
    (pair) => Math.abs(pair.corrected ?? pair.error!) <= bandFactor * pair.estimateSd!,
  ).length;
  return { held, of: banded.length };
}

function reasonsOf(pairs: readonly PairedError[]): Judgement['notCounted'] {
  const counts = new Map<string, number>();
  for (const { notCounted } of pairs) {
    if (notCounted !== null) counts.set(notCounted, (counts.get(notCounted) ?? 0) + 1);
  }
  return [...counts].map(([code, count]) => ({ code, count })).sort((a, b) => b.count - a.count);
}
