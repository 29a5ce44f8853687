import { expm } from '../../shared/numerics/matrix-exponential.ts';
import { filterSeries } from '../../shared/numerics/filter-run.ts';
import { filterWithLateSamples } from '../../shared/numerics/late-samples.ts';
import { fitNoise } from '../../shared/numerics/noise-fit.ts';
import { steadyFilter } from '../../shared/numerics/riccati.ts';
import { Matrix } from 'ml-matrix';
import { seededRandom } from './seeded-random.ts';
import type { SeededRandom } from './seeded-random.ts';
import { near } from './trial.ts';
import type { Trial } from './trial.ts';

const noInputs = new Float64Array(0);

/** A wall of two lumps, sampled each minute, the second measured: what most of the figures are simulated with. */
const wall = {
  A: [
    [0.9943, 0.0023],
    [0.0023, 0.996],
  ],
  C: [[0, 1]],
  H: [[1, 0]],
};
const wallNoise = {
  Q: [
    [0.04, 0],
    [0, 0.01],
  ],
  R: [[0.5]],
};

/** N steps of a model with two states and one reading from a random start: readings and the first state. */
function simulate(random: SeededRandom, N: number, noise: { Q: number[][]; R: number[][] }) {
  const y = new Float64Array(N);
  const truth = new Float64Array(N);
  let x = [random.normal(), random.normal()];
  for (let k = 0; k < N; k++) {
    truth[k] = x[0]!;
    y[k] = x[1]! + Math.sqrt(noise.R[0]![0]!) * random.normal();
    x = wall.A.map(
      (row, i) => row[0]! * x[0]! + row[1]! * x[1]! + Math.sqrt(noise.Q[i]![i]!) * random.normal(),
    );
  }
  return { y, truth };
}

const start = {
  x0: [0, 0],
  P0: [
    [1, 0],
    [0, 1],
  ],
};

/** Largest |P − P∞| relative to √(Pᵢᵢ Pⱼⱼ) at the step where P moves by less than 1e-10 (relative). */
function leftByStepTest(A: Matrix, C: Matrix, Q: Matrix, R: number, limit: Matrix): number {
  let P = Matrix.eye(2).mul(100);
  for (let k = 0; k < 400_000; k++) {
    const PCt = P.mmul(C.transpose());
    const S = C.mmul(PCt).get(0, 0) + R;
    const filtered = Matrix.sub(P, PCt.mmul(PCt.transpose()).div(S));
    const next = A.mmul(filtered).mmul(A.transpose()).add(Q);
    const moved = relativeDistance(next, P);
    P = next;
    if (moved < 1e-10) break;
  }
  return relativeDistance(P, limit);
}

function relativeDistance(P: Matrix, limit: Matrix): number {
  let worst = 0;
  for (let i = 0; i < 2; i++) {
    for (let j = 0; j < 2; j++) {
      const scale = Math.sqrt(limit.get(i, i) * limit.get(j, j));
      worst = Math.max(worst, Math.abs(P.get(i, j) - limit.get(i, j)) / scale);
    }
  }
  return worst;
}

const stepTest: Trial = {
  name: 'a test on the step of P stops the time-varying gain too early, up to about 5e-7 off on slow models',
  run(seed, size = 1) {
    const random = seededRandom(seed);
    let worst = 0;
    let least = Infinity;
    for (let i = 0; i < Math.ceil(12 * size); i++) {
      // Time constants of half a day to some days against a sampling interval of a minute, a quiet process.
      const days = 0.5 + 4 * random.uniform();
      const decay = Math.exp(-1 / (1440 * days));
      const A = [
        [decay, 0.0005],
        [0.0005, 0.995 * decay],
      ];
      const quiet = 10 ** (-7 - 2 * random.uniform());
      const noise = {
        Q: [
          [quiet, 0],
          [0, quiet],
        ],
        R: [[1]],
      };
      const steady = steadyFilter({ A, C: wall.C, ...noise });
      if (!steady.ok) continue;
      const limit = new Matrix(steady.predictedCovariance);
      const off = leftByStepTest(new Matrix(A), new Matrix(wall.C), new Matrix(noise.Q), 1, limit);
      worst = Math.max(worst, off);
      least = Math.min(least, off);
    }
    return { figures: { least, worst }, agrees: worst > 1e-8 && worst < 5e-6 && least > 1e-10 };
  },
};

const equalModes: Trial = {
  name: 'two and three equal modes settle to 2 % after 5.83 and 7.52 time constants, one after 3.91',
  run() {
    const figures: Record<string, number> = {};
    for (const n of [1, 2, 3]) {
      const chain = Matrix.zeros(n, n);
      for (let i = 0; i < n; i++) {
        chain.set(i, i, -1);
        if (i > 0) chain.set(i, i - 1, 1);
      }
      const step = expm(Matrix.mul(chain, 1e-3));
      let e = Matrix.ones(n, 1);
      let settled = 0;
      for (let k = 1; k < 15_000; k++) {
        e = step.mmul(e);
        if (Math.abs(e.get(n - 1, 0)) > 0.02) settled = k * 1e-3;
      }
      figures[`modes${n}`] = settled;
    }
    const agrees =
      near(figures.modes1!, Math.log(50), 0.005) &&
      near(figures.modes2!, 5.83, 0.01) &&
      near(figures.modes3!, 7.52, 0.01);
    return { figures, agrees };
  },
};

const bandCoverage: Trial = {
  name: 'the band z ± 1.96 sd of a filter with the true variances covers 95 %, and its mean NIS is 1',
  run(seed, size = 1) {
    const random = seededRandom(seed);
    let inside = 0;
    let steps = 0;
    let nis = 0;
    const runs = Math.ceil(40 * size);
    for (let i = 0; i < runs; i++) {
      const { y, truth } = simulate(random, 5000, wallNoise);
      const run = filterSeries(wall, wallNoise, start, { u: noInputs, y });
      if (!run.ok) return { figures: {}, agrees: false };
      for (let k = 0; k < truth.length; k++) {
        if (Math.abs(run.z[k]! - truth[k]!) <= 1.96 * run.sd[k]!) inside++;
        nis += run.nis[k]!;
      }
      steps += truth.length;
    }
    // Neighbouring errors hang together over some 200 steps: few independent ones.
    const independent = steps / 200;
    const figures = { coverage: inside / steps, meanNis: nis / steps };
    const agrees =
      near(figures.coverage, 0.95, 0, Math.sqrt((0.95 * 0.05) / independent)) &&
      near(figures.meanNis, 1, 0, Math.sqrt(2 / steps));
    return { figures, agrees };
  },
};

const fitCoverage: Trial = {
  name: 'the 95 % intervals of fitted noise variances cover the true ones in 88 to 99 % of histories of 1,500 readings',
  run(seed, size = 1) {
    const random = seededRandom(seed);
    const histories = Math.ceil(40 * size);
    let covered = 0;
    let answered = 0;
    for (let i = 0; i < histories; i++) {
      const { y } = simulate(random, 1500, wallNoise);
      const fit = fitNoise(
        wall,
        {
          Q: [
            [0, 0],
            [0, 0],
          ],
          R: [[0]],
        },
        [
          {
            name: 'process',
            in: 'Q',
            pattern: [
              [1, 0],
              [0, 0.25],
            ],
            start: 0.1,
            low: 1e-5,
            high: 10,
          },
          { name: 'sensor', in: 'R', pattern: [[1]], start: 0.1, low: 1e-4, high: 100 },
        ],
        start,
        { u: noInputs, y },
      );
      if (!fit.ok) continue;
      const [process, sensor] = [fit.parameters[0]!, fit.parameters[1]!];
      answered += 2;
      if (process.low <= 0.04 && process.high >= 0.04) covered++;
      if (sensor.low <= 0.5 && sensor.high >= 0.5) covered++;
    }
    const figures = { answered: answered / (2 * histories), coverage: covered / answered };
    const error = Math.sqrt((0.95 * 0.05) / answered);
    return { figures, agrees: figures.answered > 0.9 && near(figures.coverage, 0.94, 0.05, error) };
  },
};

const lateSamples: Trial = {
  name: 'laboratory samples reported 8 h late narrow the spread as much as timely ones do, once they are known',
  run(seed, size = 1) {
    const random = seededRandom(seed);
    const N = Math.max(Math.ceil(20_000 * size), 3000);
    const { y, truth } = simulate(random, N, wallNoise);
    const samples = Array.from({ length: Math.floor(N / 480) - 1 }, (_, i) => {
      const takenAt = 480 * (i + 1);
      return {
        takenAt,
        reportedAt: takenAt + 480,
        value: truth[takenAt]! + 0.1 * random.normal(),
        variance: 0.01,
      };
    });
    const run = filterWithLateSamples(wall, wallNoise, start, { u: noInputs, y }, samples);
    const timely = samples.map((sample) => ({ ...sample, reportedAt: sample.takenAt }));
    const onTime = filterWithLateSamples(wall, wallNoise, start, { u: noInputs, y }, timely);
    if (!run.ok || !onTime.ok) return { figures: {}, agrees: false };
    const last = samples[samples.length - 1]!.reportedAt;
    let worst = 0;
    for (let k = last; k < N; k++) worst = Math.max(worst, Math.abs(run.z[k]! - onTime.z[k]!));
    const figures = { worst, logLikelihood: run.logLikelihood - onTime.logLikelihood };
    return { figures, agrees: worst < 1e-9 && Math.abs(figures.logLikelihood) < 1e-6 };
  },
};

/** The figures on which the filters rest, simulated again. */
export const trials: Trial[] = [stepTest, equalModes, bandCoverage, fitCoverage, lateSamples];
