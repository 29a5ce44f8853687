import { automaticCorrection, delayedLambdaLimit } from '../../shared/numerics/automatic-correction.ts';
import { designCusum } from '../../shared/numerics/cusum-design.ts';
import { driftStart, driftStep } from '../../shared/numerics/drift.ts';
import { noCorrection } from '../../shared/numerics/recalibration-candidates.ts';
import { judgeRecalibration } from '../../shared/numerics/recalibration.ts';
import { autoregression, seededRandom } from './seeded-random.ts';
import { near } from './trial.ts';
import type { Trial } from './trial.ts';

const falseAdoption: Trial = {
  name: 'a healthy sensor with 20 samples: 1 SE adopts a richer candidate falsely in 10 %, 2 SE in 3 %',
  run(seed, size = 1) {
    const random = seededRandom(seed);
    const count = Math.ceil(4000 * size);
    const adopted = { 1: 0, 2: 0 };
    for (let i = 0; i < count; i++) {
      const errors = autoregression(random, 20, 0.3);
      const reference = Float64Array.from({ length: 20 }, () => 50 + 5 * random.normal());
      const raw = reference.map((value, k) => value + errors[k]!);
      for (const standardErrors of [1, 2] as const) {
        const options = { current: noCorrection, labSd: 0.5, closedLoop: false, standardErrors };
        const judged = judgeRecalibration({ raw, reference }, options);
        if (judged.ok && judged.chosen !== 'as-found') adopted[standardErrors]++;
      }
    }
    const figures = { oneStandardError: adopted[1] / count, twoStandardErrors: adopted[2] / count };
    const error = 0.25 / Math.sqrt(count);
    return {
      figures,
      agrees:
        near(figures.oneStandardError, 0.1, 0.02, error) &&
        near(figures.twoStandardErrors, 0.03, 0.015, error),
    };
  },
};

const delayedLambda: Trial = {
  name: 'a per-sample correction as it was d samples ago diverges for λ > 2 sin(π/(4d + 2))',
  run(_seed, size = 1) {
    const figures: Record<string, number> = {};
    let agrees = true;
    for (const delay of [0, 1, 2, 5, 10]) {
      const limit = delayedLambdaLimit(delay);
      if (!limit.ok) return { figures, agrees: false };
      for (const share of [0.97, 1.03]) {
        const c = new Array<number>(delay + 1).fill(1);
        const steps = Math.ceil(20_000 * Math.max(0.5, size));
        for (let k = 0; k < steps && Math.abs(c.at(-1)!) < 1e6; k++) {
          c.push(c.at(-1)! - share * limit.lambda * c[c.length - 1 - delay]!);
        }
        const diverged = Math.max(...c.slice(-50).map(Math.abs)) > 1;
        figures[`${share} of the limit, ${delay} late`] = Number(diverged);
        agrees &&= diverged === share > 1;
      }
    }
    return { figures, agrees };
  },
};

/** Mean squared error (single error of SD 1, target 0) of two years of 3 samples a day, automatic mode against none. */
function twoYears(
  seed: number,
  drift: (i: number) => number,
): { automatic: number; none: number; moves: number } {
  const errors = autoregression(seededRandom(seed), 2190, 0.3);
  const design = designCusum({ falseSignalsPerYear: 0.1, samplesPerYear: 1095, phi: 0.3 });
  const h = design.ok ? design.h : NaN;
  let state = driftStart();
  let correction = 0;
  const sums = { automatic: 0, none: 0, moves: 0 };
  for (const [i, noise] of errors.entries()) {
    const raw = noise + drift(i);
    const corrected = raw + correction;
    sums.none += drift(i) ** 2 / 2190;
    sums.automatic += (drift(i) + correction) ** 2 / 2190;
    const step = driftStep(state, corrected, { sd: 1, k: 0.5, h });
    state = step.state;
    if (!step.point.confirmed) continue;
    const signal = {
      meanSinceOnset: step.point.meanSinceOnset!,
      countSinceOnset: step.point.countSinceOnset,
    };
    const moved = automaticCorrection(correction, signal, { residualSd: 1, rmsep: 1 });
    if (moved.ok) correction = moved.correction;
    sums.moves++;
    state = driftStart(state.cusum.n);
  }
  return sums;
}

const automaticMode: Trial = {
  name: 'automatic mode: 0.4 moves in two healthy years (a false one is moved back), a step of 1.5 s leaves 4 % of its squares',
  run(seed, size = 1) {
    const count = Math.ceil(60 * size);
    const figures = { healthyMoves: 0, stepLeft: 0 };
    for (let i = 0; i < count; i++) {
      figures.healthyMoves += twoYears(seed + i, () => 0).moves / count;
      const stepped = twoYears(seed + i, (k) => (k > 500 ? 1.5 : 0));
      figures.stepLeft += stepped.automatic / stepped.none / count;
    }
    return {
      figures,
      agrees:
        near(figures.healthyMoves, 0.4, 0.1, 0.9 / Math.sqrt(count)) && near(figures.stepLeft, 0.04, 0.02),
    };
  },
};

export const recalibrationTrials: Trial[] = [falseAdoption, delayedLambda, automaticMode];
