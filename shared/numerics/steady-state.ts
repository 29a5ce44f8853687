import { finiteAnswer, firstRefusal, optionRefusal, vectorRefusal } from './input-checks.ts';
import type { Refusal, Result } from './result.ts';

/**
 * Filter factors of the steady-state test (mean, variance about the filtered mean, variance of differences; each in
 * (0, 1]) and the critical ratio above which the signal counts as unsteady.
 */
export type SteadyStateDesign = {
  meanFactor: number;
  varianceFactor: number;
  differenceFactor: number;
  critical: number;
};

/** The factors of Cao & Rhinehart and a critical ratio that white noise exceeds in 5 % of samples (simulated: 1.44). */
export const usualSteadyState: SteadyStateDesign = {
  meanFactor: 0.2,
  varianceFactor: 0.1,
  differenceFactor: 0.1,
  critical: 1.44,
};

/** Where the test stands after `n` readings. */
export type SteadyState = { n: number; last: number; mean: number; variance: number; differences: number };

/**
 * One reading's verdict: `ratio` of the two variance estimates (about 1 at steady state, larger when the mean moves), null
 * while neither has any spread; `steady` false above the critical ratio.
 */
export type SteadyStatePoint = { ratio: number | null; steady: boolean };

/** The test before its second reading: everything at the first. */
export function steadyStateStart(first: number): SteadyState {
  return { n: 1, last: first, mean: first, variance: 0, differences: 0 };
}

/**
 * Takes one reading at regular spacing: R = (2 − λ₁) ν²/δ², ν² filtered squared distance from the mean before the
 * reading, δ² filtered squared difference of neighbours. Meant for readings whose noise is independent: slow data raise R
 * at rest and need a wider spacing, or no test. A signal without any movement is steady. Source: Cao & Rhinehart, J.
 * Process Control 5 (1995).
 */
export function steadyStateStep(
  state: SteadyState,
  reading: number,
  design: SteadyStateDesign,
): { state: SteadyState; point: SteadyStatePoint } {
  const { meanFactor, varianceFactor, differenceFactor, critical } = design;
  const variance = varianceFactor * (reading - state.mean) ** 2 + (1 - varianceFactor) * state.variance;
  const differences =
    differenceFactor * (reading - state.last) ** 2 + (1 - differenceFactor) * state.differences;
  const mean = meanFactor * reading + (1 - meanFactor) * state.mean;
  const ratio = differences > 0 ? ((2 - meanFactor) * variance) / differences : null;
  return {
    state: { n: state.n + 1, last: reading, mean, variance, differences },
    point: { ratio, steady: ratio === null || ratio <= critical },
  };
}

/** Checks a design; null when sound. */
export function steadyStateDesignRefusal(design: SteadyStateDesign): Refusal | null {
  return firstRefusal(
    optionRefusal('meanFactor', design.meanFactor, 1e-6, 1),
    optionRefusal('varianceFactor', design.varianceFactor, 1e-6, 1),
    optionRefusal('differenceFactor', design.differenceFactor, 1e-6, 1),
    optionRefusal('critical', design.critical, Number.MIN_VALUE, Number.MAX_VALUE),
  );
}

/** Verdicts for readings 2…n in time order at regular spacing (at least two). */
export function steadyStateTest(
  readings: ArrayLike<number>,
  design: SteadyStateDesign = usualSteadyState,
): Result<{ points: SteadyStatePoint[] }> {
  const refusal = steadyStateDesignRefusal(design) ?? vectorRefusal('readings', readings, 2);
  if (refusal) return refusal;
  const points: SteadyStatePoint[] = [];
  let state = steadyStateStart(readings[0]!);
  for (let i = 1; i < readings.length; i++) {
    const step = steadyStateStep(state, readings[i]!, design);
    state = step.state;
    points.push(step.point);
  }
  return finiteAnswer({ points });
}
