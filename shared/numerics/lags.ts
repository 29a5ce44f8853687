import { Matrix } from 'ml-matrix';
import { attempt, giveUp } from './attempt.ts';
import { holdInputs } from './discretise.ts';
import { readMatrix, readNumber, readPositive, rowsOf } from './linear-algebra.ts';
import type { Result } from './result.ts';
import { readModel, readNames, readQuantity } from './state-space.ts';
import type { ContinuousModel, DiscreteModel, ModelMatrices, Quantity } from './state-space.ts';

/** What a lag stands between: the input that drives it and the quantity that follows. */
export type LagEnds = { input: Quantity; output: Quantity; gain: number };

/** Most delay states of one input: longer dead times are better taken into account by shifting the tag. */
export const longestDelay = 24;

/** First-order lag: τ dx/dt = K u − x, y = z = x. `timeConstant` τ > 0 in s, `gain` K in output per input unit. */
export function firstOrderLag(lag: LagEnds & { timeConstant: number }): Result<{ model: ContinuousModel }> {
  return attempt(() => {
    const tau = readPositive(lag?.timeConstant, 'timeConstant');
    const gain = readNumber(lag.gain, 'gain');
    const output = readQuantity(lag.output, 'output');
    return { model: oneOutput([[-1 / tau]], [[gain / tau]], [output], lag) };
  });
}

/**
 * Second-order lag: d²x/dt² + 2ζω dx/dt + ω² x = K ω² u, y = z = x. `naturalFrequency` ω > 0 in rad/s, `damping` ζ > 0.
 */
export function secondOrderLag(
  lag: LagEnds & { naturalFrequency: number; damping: number },
): Result<{ model: ContinuousModel }> {
  return attempt(() => {
    const w = readPositive(lag?.naturalFrequency, 'naturalFrequency');
    const zeta = readPositive(lag.damping, 'damping');
    const gain = readNumber(lag.gain, 'gain');
    const A = [
      [0, 1],
      [-w * w, -2 * zeta * w],
    ];
    const output = readQuantity(lag.output, 'output');
    const rate = { name: `Rate of ${output.name}`, unit: `${output.unit}/s` };
    return { model: oneOutput(A, [[0], [gain * w * w]], [output, rate], lag) };
  });
}

function oneOutput(A: number[][], B: number[][], states: Quantity[], ends: LagEnds): ContinuousModel {
  const C = [states.map((_, i) => (i === 0 ? 1 : 0))];
  const input = readQuantity(ends.input, 'input');
  const names = { states, inputs: [input], outputs: [states[0]!], estimates: [states[0]!] };
  return { domain: 'continuous', A, B, C, D: [[0]], H: C, F: [[0]], ...names };
}

/**
 * Puts a first-order sensor (a thermocouple in its sheath: τ dr/dt = y − r) behind measured output number `output` of a
 * model: adds the state "Reading of …", which is measured instead. `timeConstant` τ > 0 in s.
 */
export function withSensorLag(
  model: ContinuousModel,
  output: number,
  timeConstant: number,
): Result<{ model: ContinuousModel }> {
  return attempt(() => {
    const M = readModel(model);
    const names = readNames(model, M);
    const tau = readPositive(timeConstant, 'timeConstant');
    const measured = names.outputs[output];
    if (measured === undefined) return giveUp('out-of-range', { field: 'output', figure: output });
    const reading = { name: `Reading of ${measured.name}`, unit: measured.unit };
    const isSensor = (i: number) => i === output;
    const atSensor = (row: number[], i: number) => [
      ...row.map((c) => (isSensor(i) ? 0 : c)),
      isSensor(i) ? 1 : 0,
    ];
    const grown: ContinuousModel = {
      domain: 'continuous',
      A: [...rowsOf(M.A).map((row) => [...row, 0]), [...M.C.getRow(output).map((c) => c / tau), -1 / tau]],
      B: [...rowsOf(M.B), M.D.getRow(output).map((d) => d / tau)],
      C: rowsOf(M.C).map(atSensor),
      D: rowsOf(M.D).map((row, i) => row.map((d) => (isSensor(i) ? 0 : d))),
      H: rowsOf(M.H).map((row) => [...row, 0]),
      F: rowsOf(M.F),
      ...names,
      states: [...names.states, reading],
    };
    return { model: grown };
  });
}

/**
 * Zero-order hold with a dead time θⱼ ≥ 0 (s) on every input: with θ = (d − 1) T + τ′, 0 < τ′ ≤ T,
 * x[k+1] = Φ x[k] + Γ₀ u[k−d+1] + Γ₁ u[k−d], Γ₀ = ∫₀^{T−τ′} e^{As} ds B, Γ₁ = e^{A(T−τ′)} ∫₀^{τ′} e^{As} ds B
 * (Åström & Wittenmark, Computer-Controlled Systems, 3rd ed. 1997, section 2.3; section from memory). The past inputs
 * become states, d of them for each input; `exactStates` lists their numbers, because an observer knows them without
 * error. Refuses `out-of-range` beyond {@link longestDelay} steps.
 */
export function discretiseWithDeadTime(
  model: ContinuousModel,
  step: number,
  deadTimes: number[],
): Result<{ model: DiscreteModel; exactStates: number[] }> {
  return attempt(() => {
    const M = readModel(model);
    const T = readPositive(step, 'step');
    const thetas = readMatrix([deadTimes], 'deadTimes', { columns: M.p }).getRow(0);
    return assembleDelays(
      model,
      M,
      thetas.map((theta, j) => heldInput(M.A, M.B, j, T, theta)),
      T,
    );
  });
}

type HeldInput = { now: Matrix; late: Matrix; delay: number };

/** Γ₀, Γ₁ and d of one input; d = 0 without dead time, when the input acts at once. */
function heldInput(A: Matrix, B: Matrix, j: number, T: number, theta: number): HeldInput {
  const b = B.getColumnVector(j);
  const none = Matrix.zeros(A.rows, 1);
  if (theta < 0 || theta > longestDelay * T)
    return giveUp('out-of-range', { field: 'deadTimes', figure: theta });
  if (theta === 0) return { now: holdInputs(A, b, T).Bd, late: none, delay: 0 };
  const whole = Math.round(theta / T);
  const delay = Math.abs(theta - whole * T) <= 1e-12 * T ? whole : Math.ceil(theta / T);
  const rest = theta - (delay - 1) * T;
  if (T - rest <= 1e-12 * T) return { now: none, late: holdInputs(A, b, T).Bd, delay };
  const after = holdInputs(A, b, T - rest);
  return { now: after.Bd, late: after.Ad.mmul(holdInputs(A, b, rest).Bd), delay };
}

/** Orders the states as [x; u₁[k−1] … u₁[k−d₁]; u₂[k−1] …]. */
function assembleDelays(model: ContinuousModel, M: ModelMatrices, held: HeldInput[], T: number) {
  const { n, A } = M;
  const names = readNames(model, M);
  const size = n + held.reduce((sum, input) => sum + input.delay, 0);
  const grownA = Matrix.zeros(size, size).setSubMatrix(holdInputs(A, new Matrix(n, 0), T).Ad, 0, 0);
  const grownB = Matrix.zeros(size, held.length);
  const states = [...names.states];
  let at = n;
  held.forEach(({ now, late, delay }, j) => {
    const column = (back: number) => (back === 0 ? { M: grownB, c: j } : { M: grownA, c: at + back - 1 });
    for (let i = 0; i < n; i++) {
      const early = column(Math.max(delay - 1, 0));
      early.M.set(i, early.c, early.M.get(i, early.c) + now.get(i, 0));
      if (delay > 0) grownA.set(i, at + delay - 1, late.get(i, 0));
    }
    for (let back = 1; back <= delay; back++) {
      const source = column(back - 1);
      source.M.set(at + back - 1, source.c, 1);
      const input = names.inputs[j]!;
      states.push({ name: `${input.name}, ${back} ${back === 1 ? 'step' : 'steps'} ago`, unit: input.unit });
    }
    at += delay;
  });
  const wider = (rows: Matrix) => rowsOf(rows).map((row) => [...row, ...Array<number>(size - n).fill(0)]);
  const delayed: DiscreteModel = {
    domain: 'discrete',
    step: T,
    A: rowsOf(grownA),
    B: rowsOf(grownB),
    C: wider(M.C),
    D: rowsOf(M.D),
    H: wider(M.H),
    F: rowsOf(M.F),
    ...names,
    states,
  };
  return { model: delayed, exactStates: Array.from({ length: size - n }, (_, i) => n + i) };
}
