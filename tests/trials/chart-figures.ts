import {
  cusumStart,
  cusumStep,
  ewmaStart,
  ewmaStep,
  movingRangeConstants,
} from '../../shared/numerics/control-charts.ts';
import { correlatedRunLength, designCusum } from '../../shared/numerics/cusum-design.ts';
import { driftStart, driftStep } from '../../shared/numerics/drift.ts';
import { correlatedCusumLength } from './correlated-cusum-chain.ts';
import { seededRandom } from './seeded-random.ts';
import type { SeededRandom } from './seeded-random.ts';
import { near } from './trial.ts';
import type { Trial } from './trial.ts';

const textbook = { sd: 1, k: 0.5, h: 5 };

/** Samples until the first signal of individuals, moving range, EWMA and CUSUM charts all watched at once. */
function runOfAllFour(random: SeededRandom): number {
  const ewma = { sd: 1, lambda: 0.2, width: 3 };
  let ewmaState = ewmaStart(ewma);
  let cusumState = cusumStart();
  let previous = NaN;
  for (let n = 1; ; n++) {
    const error = random.normal();
    const ewmaNext = ewmaStep(ewmaState, error, ewma);
    const cusumNext = cusumStep(cusumState, error, textbook);
    ewmaState = ewmaNext.state;
    cusumState = cusumNext.state;
    const range = Math.abs(error - previous);
    const beyond = Math.abs(error) > 3 || range > movingRangeConstants.D4 * movingRangeConstants.d2;
    if (beyond || ewmaNext.point.signal || cusumNext.point.signal) return n;
    previous = error;
  }
}

const allChartsTogether: Trial = {
  name: 'individuals, moving range, EWMA 0.2/3 and CUSUM 0.5/5 together: ARL 88',
  run(seed, size = 1) {
    const random = seededRandom(seed);
    const count = Math.ceil(20_000 * size);
    let sum = 0;
    for (let i = 0; i < count; i++) sum += runOfAllFour(random);
    const runLength = sum / count;
    return { figures: { runLength }, agrees: near(runLength, 88, 4, 88 / Math.sqrt(count)) };
  },
};

/** Mean samples to the first signal of either sum of a CUSUM, errors of a first-order autoregression. */
function simulatedRunLength(
  random: SeededRandom,
  h: number,
  phi: number,
  shift: number,
  count: number,
): number {
  const fresh = Math.sqrt(1 - phi * phi);
  let sum = 0;
  for (let i = 0; i < count; i++) {
    let error = random.normal();
    let state = cusumStart();
    for (;;) {
      const step = cusumStep(state, error + shift, { sd: 1, k: 0.5, h });
      state = step.state;
      sum++;
      if (step.point.signal) break;
      error = phi * error + fresh * random.normal();
    }
  }
  return sum / count;
}

const textbookInterval: Trial = {
  name: 'k 0.5, h 5 at 3 samples a day and φ 0.3: 11 false signals a year; run lengths 466, 148, 70, 40 at φ 0, 0.2, 0.4, 0.6',
  run(seed, size = 1) {
    const random = seededRandom(seed);
    const count = Math.ceil(8000 * size);
    const figures: Record<string, number> = {};
    let agrees = true;
    for (const [phi, expected] of [
      [0, 466],
      [0.2, 148],
      [0.4, 70],
      [0.6, 40],
    ] as const) {
      const found = simulatedRunLength(random, 5, phi, 0, count);
      const formula = correlatedRunLength({ k: 0.5, h: 5, phi });
      figures[`simulated at ${phi}`] = found;
      figures[`formula at ${phi}`] = formula.ok ? formula.runLength : NaN;
      agrees &&= near(found / expected, 1, 0.07, 1 / Math.sqrt(count));
      agrees &&= near(figures[`formula at ${phi}`]! / found, 1, 0.07, 1 / Math.sqrt(count));
    }
    figures['false signals a year at 0.3'] = 1095 / simulatedRunLength(random, 5, 0.3, 0, count);
    agrees &&= near(figures['false signals a year at 0.3'], 11, 0.7, 11 / Math.sqrt(count));
    return { figures, agrees };
  },
};

const designedInterval: Trial = {
  name: 'h for 0.1 false signals a year at 3 samples a day and φ 0.3 is about 14',
  run(seed, size = 1) {
    const design = designCusum({ falseSignalsPerYear: 0.1, samplesPerYear: 1095, phi: 0.3 });
    if (!design.ok) return { figures: {}, agrees: false };
    const count = Math.ceil(400 * size);
    const simulated = simulatedRunLength(seededRandom(seed), design.h, 0.3, 0, count);
    const chain = correlatedCusumLength(0.5, design.h, 0.3) / 2;
    const figures = { h: design.h, wanted: design.runLength, chain, simulated };
    const agrees =
      near(design.h, 14, 0.6) &&
      near(chain / design.runLength, 1, 0.02) &&
      near(simulated / design.runLength, 1, 0.03, 1 / Math.sqrt(count));
    return { figures, agrees };
  },
};

const designAcrossCorrelations: Trial = {
  name: 'the run length of a designed CUSUM is the wanted one at φ 0 to 0.6, and shifts are seen as soon as said',
  run(seed, size = 1) {
    const random = seededRandom(seed);
    const count = Math.ceil(1500 * size);
    const figures: Record<string, number> = {};
    let agrees = true;
    for (const phi of [0, 0.15, 0.3, 0.45, 0.6]) {
      const design = designCusum({ falseSignalsPerYear: 0.5, samplesPerYear: 365, phi });
      if (!design.ok) return { figures, agrees: false };
      const inControl = simulatedRunLength(random, design.h, phi, 0, count) / design.runLength;
      const said = correlatedRunLength({ k: 0.5, h: design.h, phi, shift: 1 });
      const seen = simulatedRunLength(random, design.h, phi, 1, count) / (said.ok ? said.runLength : NaN);
      figures[`in control at ${phi}`] = inControl;
      figures[`shift 1 at ${phi}`] = seen;
      agrees &&=
        near(inControl, 1, 0.03, 1 / Math.sqrt(count)) && near(seen, 0.95, 0.08, 1 / Math.sqrt(count));
    }
    return { figures, agrees };
  },
};

const winnersCurse: Trial = {
  name: 'at a false signal (h 5) the mean since onset is 1.3 s and vanishes in the next 8 samples',
  run(seed, size = 1) {
    const random = seededRandom(seed);
    const count = Math.ceil(2000 * size);
    let atSignal = 0;
    let later = 0;
    for (let found = 0; found < count;) {
      let state = driftStart();
      for (;;) {
        const { state: next, point } = driftStep(state, random.normal(), textbook);
        state = next;
        if (!point.signalled) continue;
        atSignal += Math.abs(point.meanSinceOnset!);
        for (let i = 0; i < 8; i++) later += (Math.sign(point.meanSinceOnset!) * random.normal()) / 8;
        found++;
        break;
      }
    }
    const figures = { atSignal: atSignal / count, nextEight: later / count };
    const error = 0.4 / Math.sqrt(count);
    return {
      figures,
      agrees: near(figures.atSignal, 1.3, 0.05, error) && near(figures.nextEight, 0, 0.01, error),
    };
  },
};

export const chartTrials: Trial[] = [
  allChartsTogether,
  textbookInterval,
  designedInterval,
  designAcrossCorrelations,
  winnersCurse,
];
