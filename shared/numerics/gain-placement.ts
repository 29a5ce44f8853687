import { Matrix } from 'ml-matrix';
import { attempt, giveUp } from './attempt.ts';
import {
  eigenvaluesOf,
  nullSpace,
  oneNorm,
  readMatrix,
  readNumber,
  readPositive,
  readSquare,
  rowsOf,
  singularValues,
  solveFor,
} from './linear-algebra.ts';
import type { Complex } from './linear-algebra.ts';
import { timeConstantOf, unobservableBasis } from './observability.ts';
import type { Result } from './result.ts';
import { placeSeveralOutputs } from './robust-placement.ts';
import { placeSingleOutput, polesMissedBy } from './single-output-placement.ts';
import { readDomain } from './state-space.ts';
import type { Rows, TimeDomain } from './state-space.ts';

/**
 * A gain by pole placement. `predictorGain` K (n×m) has eig(A − K C) = the wanted poles plus those that can't be moved;
 * `filterGain` L = A⁻¹K (discrete models only; null in continuous time). `poles`: what was reached; `miss`: relative
 * change of A − K C that would make the wanted poles exact. With several outputs `determinant` and `condition` of the
 * unit eigenvectors say how robust they are (1 is best). `unmoved`: poles of parts that no output sees.
 */
export type PlacedGain = {
  predictorGain: number[][];
  filterGain: number[][] | null;
  poles: Complex[];
  unmoved: Complex[];
  miss: number;
  determinant: number | null;
  condition: number | null;
};

/** Most that the wanted poles may be missed by (relative) before the gain is refused. */
const largestMiss = 1e-6;

/**
 * Observer gain that puts the error modes at `poles` (one each for every observable state that is not exact, closed
 * under conjugation; inside the unit circle or in the left half plane). One output: {@link placeSingleOutput}; several:
 * {@link placeSeveralOutputs}. `exactStates`: numbers of states known without error (delayed inputs), which keep gain 0.
 * Refuses `not-detectable` (field C), `unstable` (poles), `wrong-shape` (poles: how many are needed), `ill-conditioned`.
 */
export function placeGain(
  model: { A: Rows; C: Rows } & TimeDomain,
  poles: Complex[],
  exactStates: number[] = [],
): Result<PlacedGain> {
  return attempt(() => {
    const time = readDomain(model);
    const A = readSquare(model.A, 'A');
    const C = readMatrix(model.C, 'C', { columns: A.rows });
    const free = freeStates(A, exactStates);
    const part = A.selection(free, free);
    const seen = observablePart(part, C.subMatrixColumn(free), time);
    const wanted = readPoles(poles, seen.basis.columns, time);
    const inner = placeObservable(seen.A, seen.C, wanted);
    const K = Matrix.zeros(A.rows, C.rows);
    const moved = seen.basis.mmul(inner.K);
    free.forEach((state, i) => K.setRow(state, moved.getRow(i)));
    const miss = polesMissedBy(Matrix.sub(seen.A, inner.K.mmul(seen.C)), wanted);
    if (miss > largestMiss) return giveUp('ill-conditioned', { field: 'poles', figure: miss });
    return {
      predictorGain: rowsOf(K),
      filterGain: time.domain === 'discrete' ? filterGainOf(part, moved, free, A.rows) : null,
      poles: eigenvaluesOf(Matrix.sub(A, K.mmul(C)), 'A'),
      unmoved: seen.unmoved,
      miss,
      determinant: inner.volume,
      condition: inner.condition !== null && Number.isFinite(inner.condition) ? inner.condition : null,
    };
  });
}

/** Predictor gain K = A L of a filter gain L (A n×n, L n×m). */
export function predictorGainOf(A: Rows, filterGain: Rows): Result<{ predictorGain: number[][] }> {
  return attempt(() => {
    const a = readSquare(A, 'A');
    return { predictorGain: rowsOf(a.mmul(readMatrix(filterGain, 'filterGain', { rows: a.rows }))) };
  });
}

/** Filter form of K on the free states: Aᶠ L = K there; exact states keep 0. Refuses `singular` when A is. */
function filterGainOf(part: Matrix, K: Matrix, free: number[], n: number): number[][] {
  const solved = solveFor(part, K, 'A');
  const L = Matrix.zeros(n, K.columns);
  free.forEach((state, i) => L.setRow(state, solved.getRow(i)));
  return rowsOf(L);
}

/** Numbers of the states that are not exact; an exact state may not be driven by another kind of state. */
function freeStates(A: Matrix, exactStates: unknown): number[] {
  if (!Array.isArray(exactStates)) return giveUp('wrong-shape', { field: 'exactStates' });
  const exact = new Set<number>(exactStates);
  const free = Array.from({ length: A.rows }, (_, i) => i).filter((i) => !exact.has(i));
  if (free.length + exact.size !== A.rows || free.length === 0) {
    return giveUp('out-of-range', { field: 'exactStates' });
  }
  for (const i of exact) {
    if (free.some((j) => A.get(i, j) !== 0))
      return giveUp('out-of-range', { field: 'exactStates', figure: i });
  }
  return free;
}

/** The part of (A, C) that the outputs see, in orthonormal coordinates; refuses when the rest does not decay. */
function observablePart(A: Matrix, C: Matrix, time: TimeDomain) {
  const hidden = unobservableBasis(A, C);
  if (hidden.columns === A.rows) return giveUp('not-observable', { field: 'C', needed: A.rows, got: 0 });
  const unmoved = hidden.columns > 0 ? eigenvaluesOf(hidden.transpose().mmul(A).mmul(hidden), 'A') : [];
  if (unmoved.some((eigenvalue) => timeConstantOf(eigenvalue, time, oneNorm(A)) === null)) {
    return giveUp('not-detectable', { field: 'C', needed: A.rows, got: A.rows - hidden.columns });
  }
  const basis = hidden.columns > 0 ? nullSpace(hidden.transpose(), 'A') : Matrix.eye(A.rows);
  return { basis, A: basis.transpose().mmul(A).mmul(basis), C: C.mmul(basis), unmoved };
}

function placeObservable(A: Matrix, C: Matrix, poles: Complex[]) {
  const { s, U } = singularValues(C, 'C');
  const rank = s.filter((value) => value > 1e-10 * s[0]!).length;
  const combine = U.subMatrix(0, C.rows - 1, 0, rank - 1).transpose();
  const C1 = combine.mmul(C);
  if (rank === 1) {
    return { K: placeSingleOutput(A, C1, poles).mmul(combine), volume: null, condition: null };
  }
  const most = Math.max(...poles.map((a) => poles.filter((b) => a.re === b.re && a.im === b.im).length));
  if (most > rank) return giveUp('out-of-range', { field: 'poles', figure: most });
  const robust = placeSeveralOutputs(A, C1, poles);
  return { ...robust, K: robust.K.mmul(combine) };
}

/** Reads poles: as many as needed, stable, conjugates in pairs. */
function readPoles(poles: unknown, needed: number, time: TimeDomain): Complex[] {
  if (!Array.isArray(poles) || poles.length !== needed) {
    return giveUp('wrong-shape', { field: 'poles', needed, got: Array.isArray(poles) ? poles.length : 0 });
  }
  const read = poles.map((pole: Complex) => ({
    re: readNumber(pole?.re, 'poles'),
    im: readNumber(pole?.im, 'poles'),
  }));
  const count = (pole: Complex, sign: number) =>
    read.filter((other) => other.re === pole.re && other.im === sign * pole.im).length;
  for (const pole of read) {
    if (count(pole, 1) !== count(pole, -1))
      return giveUp('out-of-range', { field: 'poles', figure: pole.im });
    const size = time.domain === 'discrete' ? Math.hypot(pole.re, pole.im) : pole.re;
    if (size >= (time.domain === 'discrete' ? 1 : 0))
      return giveUp('unstable', { field: 'poles', figure: size });
  }
  return read;
}

/** Wanted decay of the error: `settling` seconds to 2 %, `damping` of the leading pair, `count` states to place. */
export type WantedDecay = { count: number; settling: number; damping: number };

/** Poles from {@link settlingPoles}: in s (1/s) and, where a step was given, in z. */
export type SettlingPoles = { poles: Complex[]; fastest: number };

/**
 * Poles for a wanted settling time: a leading pair with Re = −σ and damping ζ (real for ζ = 1; one real pole at −σ where
 * `count` is odd), the others real at −1.5 σ, −2 σ, −2.5 σ …; σ such that 1 − (unit step response of the all-pole filter
 * with these poles) stays within 2 % from `settling` on. In discrete time z = e^{s T}. `fastest`: the shortest time
 * constant among them, s. Refuses `too-slow-sampling` (`figure`: longest step allowed) when T exceeds half of it.
 */
export function settlingPoles(wanted: WantedDecay, time: TimeDomain): Result<SettlingPoles> {
  return attempt(() => {
    const domain = readDomain(time);
    const settling = readPositive(wanted?.settling, 'settling');
    const damping = readPositive(wanted.damping, 'damping');
    const { count } = wanted;
    if (damping > 1 || damping < 0.2) return giveUp('out-of-range', { field: 'damping', figure: damping });
    if (!Number.isInteger(count) || count < 1 || count > 20)
      return giveUp('out-of-range', { field: 'count', figure: count });
    const pattern = polePattern(count, damping);
    const sigma = settlingOf(pattern) / settling;
    const poles = pattern.map(({ re, im }) => ({ re: re * sigma, im: im * sigma }));
    const fastest = 1 / Math.max(...poles.map((pole) => Math.hypot(pole.re, pole.im)));
    if (domain.domain === 'continuous') return { poles, fastest };
    if (domain.step > fastest / 2) return giveUp('too-slow-sampling', { field: 'step', figure: fastest / 2 });
    return { poles: poles.map((pole) => sampled(pole, domain.step)), fastest };
  });
}

function sampled({ re, im }: Complex, step: number): Complex {
  const size = Math.exp(re * step);
  return { re: size * Math.cos(im * step), im: size * Math.sin(im * step) };
}

/** Poles for σ = 1. */
function polePattern(count: number, damping: number): Complex[] {
  const w = damping < 1 ? Math.sqrt(1 - damping * damping) / damping : 0;
  const poles: Complex[] =
    count === 1
      ? [{ re: -1, im: 0 }]
      : [
          { re: -1, im: w },
          { re: -1, im: w === 0 ? 0 : -w },
        ];
  for (let i = 0; poles.length < count; i++) poles.push({ re: -1.5 - 0.5 * i, im: 0 });
  return poles;
}

/** Time after which the all-pole filter with these poles stays within 2 % of its final value, by small steps. */
function settlingOf(poles: Complex[]): number {
  const stages = poles.filter((pole) => pole.im >= 0);
  const dt = 1e-3;
  const state = stages.map(() => ({ y: 0, rate: 0 }));
  let settled = 0;
  for (let k = 1; k <= 60_000; k++) {
    let input = 1;
    stages.forEach(({ re, im }, i) => {
      const stage = state[i]!;
      if (im === 0) {
        stage.y = input + (stage.y - input) * Math.exp(re * dt);
      } else {
        const w2 = re * re + im * im;
        stage.rate += dt * (w2 * (input - stage.y) + 2 * re * stage.rate);
        stage.y += dt * stage.rate;
      }
      input = stage.y;
    });
    if (Math.abs(1 - input) > 0.02) settled = k * dt;
  }
  return settled;
}
