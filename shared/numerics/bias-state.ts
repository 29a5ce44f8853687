import { Matrix } from 'ml-matrix';
import { attempt, giveUp } from './attempt.ts';
import {
  rankOf,
  readColumn,
  readMatrix,
  readNumber,
  readSemidefinite,
  rowsOf,
  singularValues,
} from './linear-algebra.ts';
import type { Result } from './result.ts';
import { readModel } from './state-space.ts';
import type { ModelRows, Rows } from './state-space.ts';

/**
 * A bias that drifts as a random walk, b[k+1] = b[k] + w_b: it acts on the states through `intoStates` (B_b, n, per step)
 * and on the readings through `intoOutputs` (C_b, m). `variance` of w_b per step, (unit of b)².
 */
export type BiasState = { intoStates: number[]; intoOutputs: number[]; variance: number };

/** The row of a laboratory result in x (n) and what the bias adds to it (`bias`, mostly 0). */
export type LaboratoryRow = { row: number[]; bias: number };

/**
 * Adds a bias state to a discrete model: [x; b], A → [[A, B_b], [0, 1]], C → [C, C_b], Q → diag(Q, variance). Give
 * `laboratory` where samples refer to the estimate: its row becomes `laboratoryRow` (n + 1) for the samples of
 * filterWithLateSamples. The bias is refused (`not-observable`, field `bias`; needed n + 1, got the rank) unless
 * [A − I, B_b; C, C_b; laboratory row] has full column rank: otherwise a constant bias and a constant state explain
 * the same readings. Without a laboratory row that is so for a bias of the estimate itself; and one laboratory can't
 * tell its own bias from the estimate's.
 */
export function withBiasState(
  model: ModelRows,
  noise: { Q: Rows },
  bias: BiasState,
  laboratory?: LaboratoryRow,
): Result<{ model: Required<ModelRows>; Q: number[][]; laboratoryRow: number[] | null; condition: number }> {
  return attempt(() => {
    const M = readModel(model);
    const Q = readSemidefinite(noise?.Q, 'Q', M.n);
    const Bb = readColumn(bias?.intoStates, 'bias.intoStates', M.n);
    const Cb = readColumn(bias.intoOutputs, 'bias.intoOutputs', M.m);
    const variance = readNumber(bias.variance, 'bias.variance');
    if (variance < 0) return giveUp('out-of-range', { field: 'bias.variance', figure: variance });
    const laboratoryRow = laboratory ? readLaboratory(laboratory, M.n) : null;
    const joined = new Matrix([
      ...rowsOf(Matrix.sub(M.A, Matrix.eye(M.n))).map((row, i) => [...row, Bb.get(i, 0)]),
      ...rowsOf(M.C).map((row, j) => [...row, Cb.get(j, 0)]),
      ...(laboratoryRow ? [laboratoryRow] : []),
    ]);
    const scaled = unitColumns(joined);
    const rank = rankOf(scaled, 'bias');
    if (rank < M.n + 1) return giveUp('not-observable', { field: 'bias', needed: M.n + 1, got: rank });
    const { s } = singularValues(scaled, 'bias');
    const wider = (X: Matrix) => rowsOf(X).map((row) => [...row, 0]);
    return {
      model: {
        A: [...rowsOf(M.A).map((row, i) => [...row, Bb.get(i, 0)]), [...Array<number>(M.n).fill(0), 1]],
        B: [...rowsOf(M.B), Array<number>(M.p).fill(0)],
        C: rowsOf(M.C).map((row, j) => [...row, Cb.get(j, 0)]),
        D: rowsOf(M.D),
        H: wider(M.H),
        F: rowsOf(M.F),
      },
      Q: [...wider(Q), [...Array<number>(M.n).fill(0), variance]],
      laboratoryRow,
      condition: s[0]! / s[M.n]!,
    };
  });
}

function readLaboratory(laboratory: LaboratoryRow, n: number): number[] {
  const [row] = rowsOf(readMatrix([laboratory.row], 'laboratory.row', { columns: n }));
  return [...row!, readNumber(laboratory.bias, 'laboratory.bias')];
}

/** Columns scaled to unit length, so that the rank does not depend on the units of the states. */
function unitColumns(M: Matrix): Matrix {
  const scaled = M.clone();
  for (let j = 0; j < M.columns; j++) {
    const length = Math.hypot(...M.getColumn(j));
    if (length > 0) scaled.mulColumn(j, 1 / length);
  }
  return scaled;
}
