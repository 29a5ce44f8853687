import type { FilterWork, SteadyWork } from './work.ts';

/*
 * The kernels for any size, as loops: what generated/ holds unrolled. Scratch of the caller's size is made once a call,
 * not once a step.
 */

/** Time-varying Kalman filter; see FilterKernel in work.ts. */
export function filterGeneral(work: FilterWork, from: number, to: number, predicted: boolean): void {
  const { n, m, p, H, F, x, P, u, y, z, sd, nis, R, sums } = work;
  const scratch = {
    f: new Float64Array(n),
    D: new Float64Array(n * n),
    t: new Float64Array(n),
    g: new Float64Array(n),
  };
  let product = 1;
  for (let k = from; k < to; k++) {
    if (k > from || !predicted) timeUpdate(work, k, scratch.f, scratch.D);
    let taken = 0;
    let nisHere = 0;
    for (let j = 0; j < m; j++) {
      const d = y[(k - work.yStart) * m + j]!;
      if (d !== d) continue;
      const S = measurementUpdate(work, j, scratch.t, R[j]!);
      const v = correct(work, j, d, scratch.t, S);
      joseph(work, j, scratch.t, scratch.g, S);
      nisHere += (v * v) / S;
      if (work.white.length > 0) work.white[k * m + j] = v / Math.sqrt(S);
      product *= S;
      taken++;
    }
    if (nis.length > 0) nis[k] = taken > 0 ? nisHere : NaN;
    sums[0]! += taken;
    sums[2]! += nisHere;
    if (product > 1e100 || product < 1e-100) {
      sums[1]! += Math.log(product);
      product = 1;
    }
    let e = 0;
    for (let i = 0; i < n; i++) e += H[i]! * x[i]!;
    for (let j = 0; j < p; j++) e += F[j]! * u[k * p + j]!;
    z[k] = e;
    sums[3]! += e - e;
    if (sd.length > 0) {
      const variance = varianceOf(H, P);
      sd[k] = Math.sqrt(Math.max(variance, 0));
      sums[3]! += variance - variance;
    }
  }
  sums[1]! += Math.log(product);
}

/** h P hᵀ. */
export function varianceOf(h: Float64Array, P: Float64Array): number {
  const n = h.length;
  let variance = 0;
  for (let i = 0; i < n; i++) for (let l = 0; l < n; l++) variance += h[i]! * P[i * n + l]! * h[l]!;
  return variance;
}

/** x = A x + B u[k−1]; P = A P Aᵀ + Q. */
function timeUpdate(work: FilterWork, k: number, f: Float64Array, D: Float64Array): void {
  const { n, A, Q, P } = work;
  advanceState(work, k - 1, f);
  for (let i = 0; i < n; i++) {
    for (let l = 0; l < n; l++) {
      let d = 0;
      for (let o = 0; o < n; o++) d += A[i * n + o]! * P[o * n + l]!;
      D[i * n + l] = d;
    }
  }
  for (let i = 0; i < n; i++) {
    for (let j = 0; j <= i; j++) {
      let value = Q[i * n + j]!;
      for (let l = 0; l < n; l++) value += D[i * n + l]! * A[j * n + l]!;
      P[i * n + j] = P[j * n + i] = value;
    }
  }
}

/** x = A x + B u[k]. `f` is scratch of length n. */
export function advanceState(work: FilterWork, k: number, f: Float64Array): void {
  const { n, p, A, B, u, x } = work;
  for (let i = 0; i < n; i++) {
    let value = 0;
    for (let l = 0; l < n; l++) value += A[i * n + l]! * x[l]!;
    for (let j = 0; j < p; j++) value += B[j * n + i]! * u[k * p + j]!;
    f[i] = value;
  }
  x.set(f);
}

/** x and P predicted for step k + 1 from filtered at k; `f` and `D` are scratch (n and n×n). */
export function advance(work: FilterWork, k: number): void {
  timeUpdate(work, k + 1, new Float64Array(work.n), new Float64Array(work.n * work.n));
}

/** t = P cᵀ; returns S = c t + r. */
function measurementUpdate({ n, C, P }: FilterWork, j: number, t: Float64Array, r: number): number {
  let S = r;
  for (let i = 0; i < n; i++) {
    let value = 0;
    for (let l = 0; l < n; l++) value += P[i * n + l]! * C[j * n + l]!;
    t[i] = value;
    S += C[j * n + i]! * value;
  }
  return S;
}

/** x += t v/S; returns v = d − c x. */
function correct({ n, C, x }: FilterWork, j: number, d: number, t: Float64Array, S: number): number {
  let v = d;
  for (let i = 0; i < n; i++) v -= C[j * n + i]! * x[i]!;
  for (let i = 0; i < n; i++) x[i]! += (t[i]! / S) * v;
  return v;
}

/** P = M − (M cᵀ − r l) lᵀ with M = P − l tᵀ, l = t/S: Joseph's form. */
function joseph({ n, C, R, P }: FilterWork, j: number, t: Float64Array, g: Float64Array, S: number): void {
  for (let i = 0; i < n; i++) {
    let value = -R[j]! * (t[i]! / S);
    for (let l = 0; l < n; l++) value += (P[i * n + l]! - (t[i]! / S) * t[l]!) * C[j * n + l]!;
    g[i] = value;
  }
  for (let i = 0; i < n; i++) {
    for (let l = 0; l <= i; l++) {
      const value = P[i * n + l]! - (t[i]! / S) * t[l]! - g[i]! * (t[l]! / S);
      P[i * n + l] = P[l * n + i] = value;
    }
  }
}

/** Takes one more reading (row c, variance r) into x and P; returns v = value − c x and S = c P cᵀ + r. */
export function takeIn(
  work: FilterWork,
  { c, r, value }: { c: Float64Array; r: number; value: number },
): { innovation: number; S: number } {
  const one: FilterWork = { ...work, C: c, R: Float64Array.of(r) };
  const t = new Float64Array(work.n);
  const S = measurementUpdate(one, 0, t, r);
  const innovation = correct(one, 0, value, t, S);
  joseph(one, 0, t, new Float64Array(work.n), S);
  return { innovation, S };
}

/** Fixed-gain filter; see SteadyKernel in work.ts. */
export function steadyGeneral(work: FilterWork, steady: SteadyWork, from: number, to: number): number {
  const { x, u, y, z, nis, sums } = work;
  const { n, m, p, M, B, K, C, W, H, G, F, present, absent, stride } = steady;
  const f = new Float64Array(n);
  const v = new Float64Array(m);
  let k = from;
  for (; k < to; k++) {
    const at = (k - work.yStart) * stride;
    if (!hasPattern(y, at, present, absent)) break;
    let e = 0;
    for (let i = 0; i < n; i++) {
      e += H[i]! * x[i]!;
      let value = 0;
      for (let l = 0; l < n; l++) value += M[i * n + l]! * x[l]!;
      f[i] = value;
    }
    for (let j = 0; j < m; j++) {
      const d = y[at + present[j]!]!;
      let innovation = d;
      for (let l = 0; l < n; l++) innovation -= C[j * n + l]! * x[l]!;
      v[j] = innovation;
      e += G[j]! * innovation;
      for (let i = 0; i < n; i++) f[i]! += K[j * n + i]! * d;
    }
    let nisHere = 0;
    for (let i = 0, w = 0; steady.scored && i < m; i++) {
      let s = 0;
      for (let j = 0; j <= i; j++) s += W[w++]! * v[j]!;
      nisHere += s * s;
      if (work.white.length > 0) work.white[k * stride + present[i]!] = s;
    }
    for (let j = 0; j < p; j++) {
      const input = u[k * p + j]!;
      e += F[j]! * input;
      for (let i = 0; i < n; i++) f[i]! += B[j * n + i]! * input;
    }
    if (steady.scored && nis.length > 0) nis[k] = m > 0 ? nisHere : NaN;
    sums[2]! += nisHere;
    z[k] = e;
    sums[3]! += e - e;
    x.set(f);
  }
  return k;
}

/** Whether exactly the `present` readings of the row at `at` are there. */
export function hasPattern(y: Float64Array, at: number, present: Int32Array, absent: Int32Array): boolean {
  for (let i = 0; i < present.length; i++) {
    const value = y[at + present[i]!]!;
    if (value !== value) return false;
  }
  for (let i = 0; i < absent.length; i++) {
    const value = y[at + absent[i]!]!;
    if (value === value) return false;
  }
  return true;
}
