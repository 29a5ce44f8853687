/*
 * What the kernels read and write: flat arrays, so that a run over millions of steps allocates nothing. Matrices are row
 * after row, except B and K, which are stored input by input (column after column).
 */

/** Work of the time-varying filter: n states, m readings and p inputs in a step; R diagonal. */
export type FilterWork = {
  readonly n: number;
  readonly m: number;
  readonly p: number;
  readonly A: Float64Array;
  readonly B: Float64Array;
  readonly Q: Float64Array;
  /** m×n rows of the readings, each with independent noise of variance R[j]. */
  C: Float64Array;
  R: Float64Array;
  /** z = H x + F u. */
  readonly H: Float64Array;
  readonly F: Float64Array;
  readonly u: Float64Array;
  /** Readings (NaN: missing); the row of step k begins at (k − yStart)·m. */
  y: Float64Array;
  yStart: number;
  /** State and covariance (lower triangle read and written, both triangles written). */
  readonly x: Float64Array;
  readonly P: Float64Array;
  /** Results of each step; sd, nis and white (N×m, S^(−1/2)v) may be empty arrays, then they are not written. */
  z: Float64Array;
  sd: Float64Array;
  nis: Float64Array;
  white: Float64Array;
  /** [readings taken in, Σ ln det S, Σ NIS, 0 or NaN once a result left the range of numbers]. */
  readonly sums: Float64Array;
};

/**
 * Steps `from` … `to` − 1 of the time-varying filter. x and P come in predicted for `from` where `predicted`, else
 * filtered at `from` − 1; they go out filtered at `to` − 1.
 */
export type FilterKernel = (work: FilterWork, from: number, to: number, predicted: boolean) => void;

/**
 * Work of the fixed-gain filter for one measurement pattern: m present readings out of `stride` in a row. The unrolled
 * kernels want coordinates in which C = [I 0] (fixed-gain.ts); the loops take any.
 */
export type SteadyWork = {
  readonly n: number;
  readonly m: number;
  readonly p: number;
  readonly stride: number;
  /** Places of the present readings in a row of y, and of the absent ones. */
  readonly present: Int32Array;
  readonly absent: Int32Array;
  /** A − K C. */
  readonly M: Float64Array;
  readonly B: Float64Array;
  readonly K: Float64Array;
  readonly C: Float64Array;
  /** Lower triangle of S^(−1/2), row after row: NIS = |W v|², left out unless `scored`. */
  readonly W: Float64Array;
  readonly scored: boolean;
  /** z = H x + G v + F u with x predicted, G = H L. */
  readonly H: Float64Array;
  readonly G: Float64Array;
  readonly F: Float64Array;
};

/**
 * Steps from `from` on with the fixed gain, x predicted at each; stops before `to` or before the first step whose
 * pattern is another. Returns where it stopped, with x predicted for that step; adds NIS to sums[2].
 */
export type SteadyKernel = (work: FilterWork, steady: SteadyWork, from: number, to: number) => number;
