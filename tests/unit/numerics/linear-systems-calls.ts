import { withBiasState } from '../../../shared/numerics/bias-state.ts';
import { discretise, processNoise, zeroOrderHold } from '../../../shared/numerics/discretise.ts';
import { dominantSettling, errorNorms, settlingSteps } from '../../../shared/numerics/error-decay.ts';
import { filterSeries } from '../../../shared/numerics/filter-run.ts';
import { stationaryStart } from '../../../shared/numerics/filter-start.ts';
import { placeGain, predictorGainOf, settlingPoles } from '../../../shared/numerics/gain-placement.ts';
import { gainQuality } from '../../../shared/numerics/gain-quality.ts';
import { gridSeries } from '../../../shared/numerics/grid-series.ts';
import { kalmanFilter } from '../../../shared/numerics/kalman.ts';
import { filterRecords } from '../../../shared/numerics/kalman-records.ts';
import {
  bandAfterFusion,
  bandCoverage,
  laboratoryVariance,
} from '../../../shared/numerics/laboratory-noise.ts';
import {
  discretiseWithDeadTime,
  firstOrderLag,
  secondOrderLag,
  withSensorLag,
} from '../../../shared/numerics/lags.ts';
import { filterWithLateSamples } from '../../../shared/numerics/late-samples.ts';
import { continuousLyapunov, discreteLyapunov } from '../../../shared/numerics/lyapunov.ts';
import { matrixExponential } from '../../../shared/numerics/matrix-exponential.ts';
import { fitNoise } from '../../../shared/numerics/noise-fit.ts';
import { observabilityGramian } from '../../../shared/numerics/observability-gramian.ts';
import {
  hautusRank,
  noiseReach,
  observability,
  observabilityMatrix,
} from '../../../shared/numerics/observability.ts';
import { runObserver } from '../../../shared/numerics/observer.ts';
import { stirredReactor } from '../../../shared/numerics/reactors.ts';
import { solveDare, steadyFilter } from '../../../shared/numerics/riccati.ts';
import { smooth } from '../../../shared/numerics/smoother.ts';
import { squareRootFilter } from '../../../shared/numerics/square-root-filter.ts';
import { gravityTanks, mixedTanks } from '../../../shared/numerics/tanks.ts';
import { thermalNetwork, wallNodes } from '../../../shared/numerics/thermal-network.ts';

const A = [
  [0.9, 0.1],
  [0.05, 0.8],
];
const stable = [
  [-1, 0.2],
  [0.1, -2],
];
const C = [[1, 0.5]];
const I = [
  [1, 0],
  [0, 1],
];
const model = { A, B: [[1], [0.5]], C, D: [[0]], H: [[0, 1]], F: [[0]] };
const names = {
  states: [
    { name: 'a', unit: 'K' },
    { name: 'b', unit: 'K' },
  ],
  inputs: [{ name: 'u', unit: 'W' }],
  outputs: [{ name: 'y', unit: 'K' }],
  estimates: [{ name: 'z', unit: 'K' }],
};
const plant = { ...model, ...names, A: stable, domain: 'continuous' };
const noise = { Q: I, R: [[1]] };
const start = { x0: [0, 0], P0: I };
const series = {
  u: new Float64Array(90).fill(1),
  y: Float64Array.from({ length: 90 }, (_, k) => Math.sin(k)),
};
const ends = { input: { name: 'u', unit: 'W' }, output: { name: 'y', unit: 'K' }, gain: 2 };
const sampled = { domain: 'discrete', step: 5 };
const poles = [
  { re: 0.3, im: 0.1 },
  { re: 0.3, im: -0.1 },
];
const variance = { in: 'Q', pattern: I, start: 1, low: 1e-3, high: 1e3 };

const network = {
  unit: 'K',
  nodes: [{ name: 'a', heatCapacity: 10 }],
  boundaries: [{ name: 'air' }],
  links: [{ between: ['a', 'air'], conductance: 1 }],
  heats: [{ name: 'heater', into: 'a', share: 0.5 }],
  measured: ['a'],
  estimated: ['a'],
};
const wall = {
  name: 'w',
  thickness: 0.2,
  conductivity: 1,
  density: 2000,
  specificHeat: 900,
  area: 2,
  lumps: 3,
  inside: { boundary: 'gas', film: 20 },
  outside: { boundary: 'air' },
};
const levels = {
  tanks: [{ name: 't', area: 1, outlet: 0.01, level: 2 }],
  pumps: [{ name: 'p', into: [{ tank: 't', share: 1 }] }],
  measured: ['t'],
  estimated: ['t'],
};
const reactor = {
  volume: 0.1,
  flow: 0.001,
  frequencyFactor: 1e9,
  activationTemperature: 8750,
  reactionHeat: 5e4,
  heatCapacity: 2e5,
  coolingConductance: 800,
  feedConcentration: 1000,
  feedTemperature: 350,
  temperature: 350,
};
const spread = { repeatability: 1, reproducibility: 2, sampling: 1, ramp: 0.1, timeUncertainty: 3 };
const records = [
  { at: 0, sensor: 's', value: 1 },
  { at: 3, sensor: 's', value: null },
];
const irregular = { A: stable, B: [[1], [0]], density: I, sensors: { s: { row: [1, 0], variance: 1 } } };
const { steps } = kalmanFilter(model, noise, start, series) as { steps: unknown[] };

/** An exported function that gives a Result. */
export type Call = (...args: never[]) => { ok: boolean };
/** Every exported function of the linear-systems half that gives a Result, with arguments that it answers. */
export const calls: Record<string, [Call, unknown[]]> = {
  matrixExponential: [matrixExponential as Call, [A]],
  zeroOrderHold: [zeroOrderHold as Call, [stable, [[1], [0]], 2]],
  processNoise: [processNoise as Call, [stable, I, I, 2]],
  discretise: [discretise as Call, [plant, 2]],
  firstOrderLag: [firstOrderLag as Call, [{ ...ends, timeConstant: 30 }]],
  secondOrderLag: [secondOrderLag as Call, [{ ...ends, naturalFrequency: 0.1, damping: 0.5 }]],
  withSensorLag: [withSensorLag as Call, [plant, 0, 30]],
  discretiseWithDeadTime: [discretiseWithDeadTime as Call, [plant, 10, [25]]],
  discreteLyapunov: [discreteLyapunov as Call, [A, I]],
  continuousLyapunov: [continuousLyapunov as Call, [stable, I]],
  thermalNetwork: [thermalNetwork as Call, [network]],
  wallNodes: [wallNodes as Call, [wall]],
  mixedTanks: [
    mixedTanks as Call,
    [{ quantity: ends.input, volumes: [1, 2], flow: 0.1, decay: 0, estimated: 1 }],
  ],
  gravityTanks: [gravityTanks as Call, [levels]],
  stirredReactor: [stirredReactor as Call, [reactor]],
  observability: [observability as Call, [{ A, C, ...sampled }]],
  noiseReach: [noiseReach as Call, [{ A, Q: I, ...sampled }]],
  hautusRank: [hautusRank as Call, [A, C, { re: 1, im: 0 }]],
  observabilityMatrix: [observabilityMatrix as Call, [A, C]],
  observabilityGramian: [observabilityGramian as Call, [A, C, 50]],
  placeGain: [placeGain as Call, [{ A, C, ...sampled }, poles, []]],
  predictorGainOf: [predictorGainOf as Call, [A, [[1], [2]]]],
  settlingPoles: [settlingPoles as Call, [{ count: 2, settling: 600, damping: 0.7 }, sampled]],
  solveDare: [solveDare as Call, [{ A, B: [[1], [0]], Q: I, R: [[1]], S: [[0], [0]] }]],
  steadyFilter: [steadyFilter as Call, [{ A, C, ...noise }]],
  gainQuality: [gainQuality as Call, [{ ...model, step: 5 }, noise, [[0.3], [0.1]], [1, 1]]],
  errorNorms: [errorNorms as Call, [A, [1, 1], 9]],
  settlingSteps: [settlingSteps as Call, [A, [1, 1], 0.02]],
  dominantSettling: [dominantSettling as Call, [A, sampled, 0.02]],
  kalmanFilter: [kalmanFilter as Call, [model, noise, start, series]],
  squareRootFilter: [squareRootFilter as Call, [model, noise, start, series]],
  filterSeries: [filterSeries as Call, [model, noise, start, series]],
  stationaryStart: [stationaryStart as Call, [model, noise, [1]]],
  filterRecords: [filterRecords as Call, [irregular, start, records, [{ at: -1, u: [1] }]]],
  runObserver: [runObserver as Call, [model, { form: 'filter', gain: [[0.3], [0.1]] }, [0, 0], series]],
  filterWithLateSamples: [
    filterWithLateSamples as Call,
    [model, noise, start, series, [{ takenAt: 3, reportedAt: 9, value: 1, variance: 1 }]],
  ],
  withBiasState: [
    withBiasState as Call,
    [model, noise, { intoStates: [0, 0], intoOutputs: [1], variance: 1 }, { row: [1, 0], bias: 0 }],
  ],
  laboratoryVariance: [laboratoryVariance as Call, [spread]],
  bandAfterFusion: [bandAfterFusion as Call, [1, 2]],
  bandCoverage: [bandCoverage as Call, [Array.from({ length: 20 }, () => ({ error: 1, expectedSd: 1 }))]],
  fitNoise: [
    fitNoise as Call,
    [model, noise, [variance, { ...variance, in: 'R', pattern: [[1]] }], start, series, 0],
  ],
  gridSeries: [gridSeries as Call, [[new Float64Array(3)], [new Float64Array(3)]]],
  smooth: [smooth as Call, [steps]],
};
