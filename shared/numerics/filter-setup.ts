import { Matrix } from 'ml-matrix';
import { Refused } from './attempt.ts';
import { decorrelate } from './kalman.ts';
import { fixedGain, flat } from './fixed-gain.ts';
import type { FixedGain } from './fixed-gain.ts';
import { choleskyOf, largest, solveFor } from './linear-algebra.ts';
import { dlyap } from './lyapunov.ts';
import { steadyState } from './riccati.ts';
import type { ModelMatrices } from './state-space.ts';

/** A measurement pattern: bit j is set when reading j of the row is present. */
export type Pattern = number;

/** Most readings of a row that a {@link Pattern} can hold. */
export const mostReadings = 30;

/** The filter's steady state for one pattern, ready for the fixed-gain kernel. */
export type SteadyPattern = FixedGain & {
  predicted: Float64Array;
  filtered: Float64Array;
  sd: number;
  logDet: number;
};

/** Rows of a pattern made independent (R diagonal): C and R for the kernel, and U⁻¹ that does the same to y. */
export type IndependentRows = { C: Float64Array; R: Float64Array; inverse: Matrix; present: Int32Array };

/** A checked model with what the fast filter derives from it once and keeps: steady states and rows by pattern. */
export class FilterSetup {
  readonly correlated: boolean;
  readonly feedthrough: boolean;
  private readonly steadies = new Map<Pattern, SteadyPattern | null>();
  private readonly rows = new Map<Pattern, IndependentRows>();

  constructor(
    readonly M: ModelMatrices,
    readonly Q: Matrix,
    readonly R: Matrix,
  ) {
    this.correlated = largest(Matrix.sub(R, Matrix.diag(R.diagonal()))) > 0;
    this.feedthrough = largest(M.D) > 0;
  }

  /** The steady state while this pattern lasts; null where there is none (a mode unseen or undriven that lasts). */
  steady(pattern: Pattern): SteadyPattern | null {
    let found = this.steadies.get(pattern);
    if (found === undefined) {
      found = this.solve(pattern);
      this.steadies.set(pattern, found);
    }
    return found;
  }

  /** The rows of a pattern with independent noise. */
  independent(pattern: Pattern): IndependentRows {
    let found = this.rows.get(pattern);
    if (!found) {
      found = this.separate(pattern);
      this.rows.set(pattern, found);
    }
    return found;
  }

  private solve(pattern: Pattern): SteadyPattern | null {
    try {
      return this.steadyOf(presentIn(pattern, this.M.m));
    } catch (error) {
      if (error instanceof Refused) return null;
      throw error;
    }
  }

  private steadyOf(present: number[]): SteadyPattern {
    const { A, n } = this.M;
    if (present.length === 0) {
      const P = dlyap(A, this.Q);
      const none = { L: new Matrix(n, 0), C: new Matrix(0, n), S: new Matrix(0, 0) };
      return this.pack(present, { ...none, P, filtered: P });
    }
    const C = this.M.C.subMatrixRow(present);
    return this.pack(present, {
      ...steadyState({ A, C, Q: this.Q, R: this.R.selection(present, present) }),
      C,
    });
  }

  private pack(
    present: number[],
    { L, C, S, P, filtered }: { L: Matrix; C: Matrix; S: Matrix; P: Matrix; filtered: Matrix },
  ): SteadyPattern {
    const { A, H } = this.M;
    const h = H.getRowVector(0);
    const root = present.length > 0 ? choleskyOf(S, 'R') : S;
    const white = present.length > 0 ? solveFor(root, Matrix.eye(present.length), 'R') : S;
    return {
      ...fixedGain(this.M, { L, K: A.mmul(L), C, present, white }),
      predicted: flat(P),
      filtered: flat(filtered),
      sd: Math.sqrt(Math.max(h.mmul(filtered).mmul(h.transpose()).get(0, 0), 0)),
      logDet: 2 * root.diagonal().reduce((sum, d) => sum + Math.log(d), 0),
    };
  }

  private separate(pattern: Pattern): IndependentRows {
    const { m, n } = this.M;
    const rows = presentIn(pattern, m);
    const C = new Float64Array(m * n);
    const R = new Float64Array(m).fill(1);
    if (rows.length === 0) return { C, R, inverse: new Matrix(0, 0), present: new Int32Array(0) };
    const identity = Matrix.eye(rows.length);
    const cut = { C: this.M.C.subMatrixRow(rows), R: this.R.selection(rows, rows) };
    const apart = decorrelate({ ...cut, y: identity, offset: identity });
    rows.forEach((row, i) => {
      C.set(apart.C.getRow(i), row * n);
      R[row] = apart.R.get(i, i);
    });
    return { C, R, inverse: apart.y, present: Int32Array.from(rows) };
  }
}

/** Numbers of the readings present in a pattern. */
function presentIn(pattern: Pattern, m: number): number[] {
  return Array.from({ length: m }, (_, j) => j).filter((j) => (pattern >> j) & 1);
}
