import { determinant, EigenvalueDecomposition, LuDecomposition, Matrix } from 'ml-matrix';
import { giveUp } from './attempt.ts';
import { conditionNumber, nullSpace, singularValues, solveFor } from './linear-algebra.ts';
import type { Complex } from './linear-algebra.ts';

/*
 * Robust pole placement for several outputs. In the dual (state-feedback) form A + B F with A := Aᵀ, B := Cᵀ the
 * closed-loop eigenvector of pole λ lies in S(λ) = null(U₁ᵀ(A − λI)), B = [U₀ U₁][Z; 0] (Kautsky, Nichols & Van Dooren,
 * Int. J. Control 41 (1985) 1129–1155, theorem 3). Unit vectors xⱼ ∈ S(λⱼ) are chosen to make |det X| as large as
 * possible, two real vectors or one complex pair at a time (Tits & Yang, IEEE Trans. Automatic Control 41 (1996)
 * 1432–1452); each such step is solved exactly: with W an orthonormal basis of what the other n − 2 vectors leave,
 * |det X| is proportional to |det Wᵀ[x y]|, a bilinear form of the two real vectors (largest singular value) or a
 * Hermitian form of the complex one (eigenvalue of largest modulus).
 */

/** A closed-loop eigenvector (pair) and the space it may be chosen from: re + i·im, `basis` orthonormal. */
type Slot = { pole: Complex; basis: { re: Matrix; im: Matrix }; re: Matrix; im: Matrix };

/** A robust gain with the measures of its eigenvector matrix X of unit columns: |det X| and cond₂ X. */
export type RobustGain = { K: Matrix; volume: number; condition: number };

const startsTried = 2;
const mostSweeps = 80;

/**
 * K (n×m) with eig(A − K C) = poles, C m×n of full row rank m ≥ 2, (A, C) observable, no pole more often than m times.
 * The gain is not unique; this one has eigenvectors as nearly orthogonal as can be. Throws `Refused`.
 */
export function placeSeveralOutputs(A: Matrix, C: Matrix, poles: Complex[]): RobustGain {
  const dual = A.transpose();
  const B = C.transpose();
  const slots = poles.filter((pole) => pole.im >= 0).map((pole) => slotOf(dual, B, pole));
  const random = generator();
  let best: { slots: Slot[]; volume: number } | null = null;
  for (let start = 0; start < startsTried; start++) {
    const tried = improve(slots.map((slot) => withRandomVector(slot, random)));
    if (!best || tried.volume > best.volume) best = tried;
  }
  if (!best || !(best.volume > 1e-12)) {
    return giveUp('ill-conditioned', { field: 'poles', figure: best?.volume ?? 0 });
  }
  return gainOf(dual, B, best.slots, best.volume);
}

/** F = Z⁻¹ U₀ᵀ(X Λ X⁻¹ − A), here as the least-squares solution of B F = X Λ X⁻¹ − A (KNV eq. 3.2); K = −Fᵀ. */
function gainOf(A: Matrix, B: Matrix, slots: Slot[], volume: number): RobustGain {
  const X = columnsOf(slots);
  const Lambda = Matrix.zeros(A.rows, A.rows);
  let at = 0;
  for (const { pole } of slots) {
    Lambda.set(at, at, pole.re);
    if (pole.im > 0) {
      Lambda.set(at, at + 1, pole.im);
      Lambda.set(at + 1, at, -pole.im);
      Lambda.set(at + 1, at + 1, pole.re);
    }
    at += pole.im > 0 ? 2 : 1;
  }
  const M = solveFor(X.transpose(), X.mmul(Lambda).transpose(), 'poles').transpose();
  const normal = B.transpose().mmul(B);
  const F = solveFor(normal, B.transpose().mmul(Matrix.sub(M, A)), 'C');
  return { K: F.transpose().mul(-1), volume, condition: conditionNumber(X, 'poles') };
}

function slotOf(A: Matrix, B: Matrix, pole: Complex): Slot {
  const n = A.rows;
  const rest = nullSpace(B.transpose(), 'C').transpose();
  const shifted = Matrix.sub(A, Matrix.eye(n).mul(pole.re));
  const none = { re: Matrix.zeros(n, 1), im: Matrix.zeros(n, 1) };
  if (rest.rows === 0) return { pole, basis: { re: Matrix.eye(n), im: Matrix.zeros(n, n) }, ...none };
  const upper = rest.mmul(shifted);
  if (pole.im === 0) {
    const re = nullSpace(upper, 'A');
    return { pole, basis: { re, im: Matrix.zeros(n, re.columns) }, ...none };
  }
  const turn = Matrix.mul(rest, pole.im);
  const k = rest.rows;
  const real = Matrix.zeros(2 * k, 2 * n)
    .setSubMatrix(upper, 0, 0)
    .setSubMatrix(upper, k, n)
    .setSubMatrix(turn, 0, n)
    .setSubMatrix(Matrix.mul(turn, -1), k, 0);
  return { pole, basis: complexBasis(nullSpace(real, 'A'), n), ...none };
}

/** Orthonormal complex basis of a space given by a real basis of stacked [re; im] vectors (pivoted Gram–Schmidt). */
function complexBasis(real: Matrix, n: number): { re: Matrix; im: Matrix } {
  const vectors = Array.from({ length: real.columns }, (_, j) => real.getColumn(j));
  const chosen: number[][] = [];
  while (chosen.length < real.columns / 2) {
    const lengths = vectors.map((v) => Math.hypot(...v));
    const pick = vectors[lengths.indexOf(Math.max(...lengths))]!;
    const length = Math.hypot(...pick);
    const unit = pick.map((value) => value / length);
    chosen.push(unit);
    for (const v of vectors) {
      let re = 0;
      let im = 0;
      for (let i = 0; i < n; i++) {
        re += unit[i]! * v[i]! + unit[n + i]! * v[n + i]!;
        im += unit[i]! * v[n + i]! - unit[n + i]! * v[i]!;
      }
      for (let i = 0; i < n; i++) {
        const a = unit[i]!;
        const b = unit[n + i]!;
        v[i]! -= re * a - im * b;
        v[n + i]! -= re * b + im * a;
      }
    }
  }
  const part = (offset: number) => new Matrix(chosen.map((v) => v.slice(offset, offset + n))).transpose();
  return { re: part(0), im: part(n) };
}

function withRandomVector(slot: Slot, random: () => number): Slot {
  const r = slot.basis.re.columns;
  const coefficients = () => Matrix.columnVector(Array.from({ length: r }, random));
  return withVector(slot, coefficients(), slot.pole.im === 0 ? Matrix.zeros(r, 1) : coefficients());
}

/** x = (basis)(a + i b), scaled to unit length. */
function withVector(slot: Slot, a: Matrix, b: Matrix): Slot {
  const { re: P, im: Q } = slot.basis;
  const re = Matrix.sub(P.mmul(a), Q.mmul(b));
  const im = Matrix.add(P.mmul(b), Q.mmul(a));
  const length = Math.hypot(...re.to1DArray(), ...im.to1DArray()) || 1;
  return { ...slot, re: re.div(length), im: im.div(length) };
}

/** Real columns of X: x for a real pole, √2 Re x and √2 Im x for a pair (the same |det| and condition as [x x̄]). */
function columnsOf(slots: Slot[]): Matrix {
  const columns = slots.flatMap(({ pole, re, im }) =>
    pole.im === 0 ? [re.to1DArray()] : [re, im].map((part) => Matrix.mul(part, Math.SQRT2).to1DArray()),
  );
  return new Matrix(columns).transpose();
}

/** |det X|. */
function volumeOf(slots: Slot[]): number {
  return Math.abs(determinant(columnsOf(slots)));
}

/** Sweeps over all pairs until |det X| stands still (relative 1e-7). */
function improve(start: Slot[]): { slots: Slot[]; volume: number } {
  const slots = [...start];
  const real = slots.flatMap((slot, i) => (slot.pole.im === 0 ? [i] : []));
  let volume = volumeOf(slots);
  for (let sweep = 0; sweep < mostSweeps; sweep++) {
    slots.forEach((slot, i) => {
      if (slot.pole.im > 0) slots[i] = bestPair(slot, leftBy(slots, [i]));
    });
    if (real.length === 1) slots[real[0]!] = bestReal(slots[real[0]!]!, leftBy(slots, real));
    for (const [a, i] of real.entries()) {
      for (const j of real.slice(a + 1)) {
        [slots[i], slots[j]] = bestTwo(slots[i]!, slots[j]!, leftBy(slots, [i, j]));
      }
    }
    const now = volumeOf(slots);
    if (now <= volume * (1 + 1e-7)) return { slots, volume: Math.max(now, volume) };
    volume = now;
  }
  return { slots, volume };
}

/**
 * Orthonormal basis of the directions that the slots other than `without` leave free: the rows of X⁻¹ that belong to
 * these slots are orthogonal to all other columns of X.
 */
function leftBy(slots: Slot[], without: number[]): Matrix {
  const inverse = new LuDecomposition(columnsOf(slots)).solve(Matrix.eye(slots[0]!.re.rows));
  let at = 0;
  const basis: number[][] = [];
  slots.forEach((slot, i) => {
    const width = slot.pole.im > 0 ? 2 : 1;
    for (let row = at; row < at + width && without.includes(i); row++)
      basis.push(unitBeside(inverse.getRow(row), basis));
    at += width;
  });
  return new Matrix(basis).transpose();
}

/** The unit vector of what `v` adds to an orthonormal `basis`. */
function unitBeside(v: number[], basis: number[][]): number[] {
  let rest = v;
  for (const b of basis) {
    const along = rest.reduce((sum, value, i) => sum + value * b[i]!, 0);
    rest = rest.map((value, i) => value - along * b[i]!);
  }
  const length = Math.hypot(...rest);
  return rest.map((value) => value / length);
}

/** T = w₁w₂ᵀ − w₂w₁ᵀ: det Wᵀ[x y] = xᵀ T y. */
function areaForm(W: Matrix): Matrix {
  const w1 = W.getColumnVector(0);
  const w2 = W.getColumnVector(1);
  return Matrix.sub(w1.mmul(w2.transpose()), w2.mmul(w1.transpose()));
}

function bestReal(slot: Slot, W: Matrix): Slot {
  const a = slot.basis.re.transpose().mmul(W);
  return withVector(slot, a, Matrix.zeros(a.rows, 1));
}

function bestTwo(one: Slot, two: Slot, W: Matrix): [Slot, Slot] {
  const M = one.basis.re.transpose().mmul(areaForm(W)).mmul(two.basis.re);
  const { U, V } = singularValues(M, 'poles');
  const none = Matrix.zeros(M.rows, 1);
  return [withVector(one, U.getColumnVector(0), none), withVector(two, V.getColumnVector(0), none)];
}

function bestPair(slot: Slot, W: Matrix): Slot {
  const { re: P, im: Q } = slot.basis;
  const T = areaForm(W);
  const r = P.columns;
  const PQ = P.transpose().mmul(T).mmul(Q);
  const real = Matrix.add(PQ, PQ.transpose());
  const imaginary = Matrix.add(P.transpose().mmul(T).mmul(P), Q.transpose().mmul(T).mmul(Q)).mul(-1);
  const hermitian = Matrix.zeros(2 * r, 2 * r)
    .setSubMatrix(real, 0, 0)
    .setSubMatrix(real, r, r)
    .setSubMatrix(Matrix.mul(imaginary, -1), 0, r)
    .setSubMatrix(imaginary, r, 0);
  const evd = new EigenvalueDecomposition(hermitian, { assumeSymmetric: true });
  const size = evd.realEigenvalues.map(Math.abs);
  const c = evd.eigenvectorMatrix.getColumn(size.indexOf(Math.max(...size)));
  return withVector(slot, Matrix.columnVector(c.slice(0, r)), Matrix.columnVector(c.slice(r)));
}

/** Park–Miller numbers in (−1, 1) from a fixed seed: the same gain every time. */
function generator(): () => number {
  let state = 20250101;
  return () => {
    state = (16807 * state) % 2147483647;
    return (2 * state) / 2147483647 - 1;
  };
}
