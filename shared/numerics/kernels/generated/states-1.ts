// Written by generate.ts from kernel-source.ts; change those, not this.
import type { FilterWork, SteadyWork } from '../work.ts';

/** Time-varying Kalman filter for 1 state; see FilterKernel in work.ts. */
// prettier-ignore
export function filter1(work: FilterWork, from: number, to: number, predicted: boolean): void {
const { A, B, C, Q, R, H, F, x, P, u, y, z, sd, nis, white, m, p, sums } = work;
const a0_0 = A[0]!;
const q0_0 = Q[0]!;
const h0 = H[0]!;
let x0 = x[0]!;
let p0_0 = P[0]!;
const wantNis = nis.length > 0, wantSd = sd.length > 0, wantWhite = white.length > 0;
let readings = 0, logDet = 0, quad = 0, product = 1, check = 0, skip = predicted;
for (let k = from; k < to; k++) {
if (skip) { skip = false; } else {
let f0 = a0_0 * x0;
for (let j = 0, b = 0, i = (k - 1) * p; j < p; j++, b += 1) { const w = u[i++]!; f0 += B[b]! * w; }
x0 = f0;
const d0_0 = a0_0 * p0_0;
p0_0 = q0_0 + d0_0 * a0_0;
}
let nisHere = 0, taken = 0, at = (k - work.yStart) * m;
for (let j = 0, c = 0; j < m; j++, c += 1) {
const d = y[at++]!;
if (d !== d) continue;
const r = R[j]!;
const c0 = C[c]!;
const t0 = p0_0 * c0;
const S = r + c0 * t0;
const w = 1 / S, v = d - (c0 * x0);
nisHere += v * v * w; product *= S; taken++;
if (wantWhite) white[k * m + j] = v * Math.sqrt(w);
const l0 = t0 * w;
x0 += l0 * v;
const m0_0 = p0_0 - l0 * t0;
const g0 = m0_0 * c0 - r * l0;
p0_0 = m0_0 - g0 * l0;
}
if (wantNis) nis[k] = taken > 0 ? nisHere : NaN;
readings += taken; quad += nisHere;
if (product > 1e100 || product < 1e-100) { logDet += Math.log(product); product = 1; }
let e = h0 * x0;
for (let j = 0, b = k * p; j < p; j++) e += F[j]! * u[b++]!;
z[k] = e; check += e - e;
if (wantSd) {
const e0 = p0_0 * h0;
const variance = h0 * e0;
sd[k] = variance > 0 ? Math.sqrt(variance) : 0; check += variance - variance; }
}
x[0] = x0;
P[0] = p0_0;
sums[0]! += readings; sums[1]! += logDet + Math.log(product); sums[2]! += quad; sums[3]! += check;
}

/** Fixed-gain filter for 1 state and 1 reading; see SteadyKernel in work.ts. */
// prettier-ignore
export function steady1x1(work: FilterWork, steady: SteadyWork, from: number, to: number): number {
const { x, u, y, z, nis, white, p, sums } = work;
const { M, B, K, W, H, G, F, present, absent, stride } = steady;
const m0_0 = M[0]!;
const k0_0 = K[0]!;
const w0_0 = W[0]!;
const h0 = H[0]!;
const g0 = G[0]!, o0 = present[0]!;
const one = p > 0, two = p > 1, r0 = one ? F[0]! : 0, r1 = two ? F[1]! : 0;
const b0_0 = one ? B[0]! : 0, b1_0 = two ? B[1]! : 0;
let x0 = x[0]!;
const missing = absent.length, wantNis = nis.length > 0, wantWhite = white.length > 0, scored = steady.scored;
let quad = 0, check = 0, k = from, at = (from - work.yStart) * stride, ku = from * p;
for (; k < to; k++, at += stride) {
const y0 = y[at + o0]!;
if (y0 !== y0) break;
if (missing > 0) { let i = 0; while (i < missing && y[at + absent[i]!] !== y[at + absent[i]!]) i++; if (i < missing) break; }
const v0 = y0 - x0;
if (scored) { const s0 = w0_0 * v0; const q = s0 * s0; quad += q; if (wantNis) nis[k] = q; if (wantWhite) { white[k * stride + o0] = s0; } }
let e = (h0 * x0) + (g0 * v0);
let f0 = (m0_0 * x0) + (k0_0 * y0);
const u0 = one ? u[ku]! : 0, u1 = two ? u[ku + 1]! : 0; e += r0 * u0 + r1 * u1;
f0 += b0_0 * u0 + b1_0 * u1;
for (let j = 2, b = 2; j < p; j++, b += 1) { const w = u[ku + j]!; e += F[j]! * w; f0 += B[b]! * w; }
ku += p;
z[k] = e; check += e - e;
x0 = f0;
}
x[0] = x0;
sums[2]! += quad; sums[3]! += check;
return k;
}
