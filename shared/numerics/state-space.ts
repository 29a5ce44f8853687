import { Matrix } from 'ml-matrix';
import { giveUp } from './attempt.ts';
import { readMatrix } from './linear-algebra.ts';

/** A matrix as rows; row-major, JSON-ready. */
export type Rows = readonly (readonly number[])[];

/** Name and engineering unit of a state, an input, an output or an estimate. */
export type Quantity = { name: string; unit: string };

/** Whether A belongs to dx/dt = A x or to x[k+1] = A x[k] with `step` seconds between k and k + 1. */
export type TimeDomain = { domain: 'continuous' } | { domain: 'discrete'; step: number };

/**
 * Matrices of a linear model with n states, p inputs, m measured outputs, q estimated quantities.
 * Continuous: dx/dt = A x + B u; discrete: x[k+1] = A x[k] + B u[k]. Both: y = C x + D u, z = H x + F u.
 * A n×n, B n×p (default none), C m×n, D m×p (default 0), H q×n (default: every state), F q×p (default 0).
 */
export type ModelRows = { A: Rows; B?: Rows; C: Rows; D?: Rows; H?: Rows; F?: Rows };

/** A linear model with its time domain and the names and units of everything in it. */
export type LinearModel = TimeDomain &
  Required<ModelRows> & {
    states: Quantity[];
    inputs: Quantity[];
    outputs: Quantity[];
    estimates: Quantity[];
  };

/** A model of dx/dt = A x + B u, time in seconds. */
export type ContinuousModel = LinearModel & { domain: 'continuous' };

/** A model of x[k+1] = A x[k] + B u[k] with `step` seconds between k and k + 1. */
export type DiscreteModel = LinearModel & { domain: 'discrete'; step: number };

/** Covariances of the discrete model: Q n×n of w, R m×m of v. */
export type NoiseRows = { Q: Rows; R: Rows };

/** The matrices of {@link ModelRows}, read and checked, with all defaults filled in. */
export type ModelMatrices = {
  n: number;
  p: number;
  m: number;
  q: number;
  A: Matrix;
  B: Matrix;
  C: Matrix;
  D: Matrix;
  H: Matrix;
  F: Matrix;
};

/** Reads a model; refuses `wrong-shape` or `non-finite-input` with the matrix at fault. Throws `Refused`. */
export function readModel(model: ModelRows): ModelMatrices {
  if (typeof model !== 'object' || model === null) return giveUp('wrong-shape', { field: 'model' });
  const n = Array.isArray(model.A) ? model.A.length : 0;
  const A = readMatrix(model.A, 'A', { rows: n, columns: n });
  const B = model.B === undefined ? new Matrix(n, 0) : readMatrix(model.B, 'B', { rows: n });
  const C = readMatrix(model.C, 'C', { columns: n });
  const p = B.columns;
  const m = C.rows;
  const D = model.D === undefined ? Matrix.zeros(m, p) : readMatrix(model.D, 'D', { rows: m, columns: p });
  const H = model.H === undefined ? Matrix.eye(n) : readMatrix(model.H, 'H', { columns: n });
  const q = H.rows;
  const F = model.F === undefined ? Matrix.zeros(q, p) : readMatrix(model.F, 'F', { rows: q, columns: p });
  return { n, p, m, q, A, B, C, D, H, F };
}

/** Reads the time domain; a discrete one needs a step above zero. Throws `Refused`. */
export function readDomain(time: TimeDomain): TimeDomain {
  if (typeof time !== 'object' || time === null) return giveUp('wrong-shape', { field: 'domain' });
  if (time.domain === 'continuous') return { domain: 'continuous' };
  if (time.domain !== 'discrete') return giveUp('out-of-range', { field: 'domain' });
  if (!Number.isFinite(time.step)) return giveUp('non-finite-input', { field: 'step' });
  if (!(time.step > 0)) return giveUp('out-of-range', { field: 'step', figure: time.step });
  return { domain: 'discrete', step: time.step };
}

/** Reads a name and unit; refuses `wrong-shape`. Throws `Refused`. */
export function readQuantity(value: unknown, field: string): Quantity {
  const given = value as Quantity | null | undefined;
  if (typeof given?.name !== 'string' || typeof given.unit !== 'string')
    return giveUp('wrong-shape', { field });
  return { name: given.name, unit: given.unit };
}

/** Names and units of a model whose matrices are already read. Throws `Refused`. */
export function readNames(model: LinearModel, M: ModelMatrices) {
  const list = (field: 'states' | 'inputs' | 'outputs' | 'estimates', length: number): Quantity[] => {
    const names: unknown = model[field];
    if (!Array.isArray(names)) return giveUp('wrong-shape', { field, needed: length });
    if (names.length !== length) return giveUp('wrong-shape', { field, needed: length, got: names.length });
    return names.map((name, i) => readQuantity(name, `${field}[${i}]`));
  };
  return {
    states: list('states', M.n),
    inputs: list('inputs', M.p),
    outputs: list('outputs', M.m),
    estimates: list('estimates', M.q),
  };
}
