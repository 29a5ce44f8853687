// Written by generate.ts from kernel-source.ts; change those, not this.
import type { FilterWork, SteadyWork } from '../work.ts';

/** Time-varying Kalman filter for 3 states; see FilterKernel in work.ts. */
// prettier-ignore
export function filter3(work: FilterWork, from: number, to: number, predicted: boolean): void {
const { A, B, C, Q, R, H, F, x, P, u, y, z, sd, nis, white, m, p, sums } = work;
const a0_0 = A[0]!; const a0_1 = A[1]!; const a0_2 = A[2]!; const a1_0 = A[3]!; const a1_1 = A[4]!; const a1_2 = A[5]!; const a2_0 = A[6]!; const a2_1 = A[7]!; const a2_2 = A[8]!;
const q0_0 = Q[0]!; const q1_0 = Q[3]!; const q1_1 = Q[4]!; const q2_0 = Q[6]!; const q2_1 = Q[7]!; const q2_2 = Q[8]!;
const h0 = H[0]!; const h1 = H[1]!; const h2 = H[2]!;
let x0 = x[0]!; let x1 = x[1]!; let x2 = x[2]!;
let p0_0 = P[0]!; let p1_0 = P[3]!; let p1_1 = P[4]!; let p2_0 = P[6]!; let p2_1 = P[7]!; let p2_2 = P[8]!;
const wantNis = nis.length > 0, wantSd = sd.length > 0, wantWhite = white.length > 0;
let readings = 0, logDet = 0, quad = 0, product = 1, check = 0, skip = predicted;
for (let k = from; k < to; k++) {
if (skip) { skip = false; } else {
let f0 = a0_0 * x0 + a0_1 * x1 + a0_2 * x2; let f1 = a1_0 * x0 + a1_1 * x1 + a1_2 * x2; let f2 = a2_0 * x0 + a2_1 * x1 + a2_2 * x2;
for (let j = 0, b = 0, i = (k - 1) * p; j < p; j++, b += 3) { const w = u[i++]!; f0 += B[b]! * w; f1 += B[b + 1]! * w; f2 += B[b + 2]! * w; }
x0 = f0; x1 = f1; x2 = f2;
const d0_0 = a0_0 * p0_0 + a0_1 * p1_0 + a0_2 * p2_0; const d0_1 = a0_0 * p1_0 + a0_1 * p1_1 + a0_2 * p2_1; const d0_2 = a0_0 * p2_0 + a0_1 * p2_1 + a0_2 * p2_2; const d1_0 = a1_0 * p0_0 + a1_1 * p1_0 + a1_2 * p2_0; const d1_1 = a1_0 * p1_0 + a1_1 * p1_1 + a1_2 * p2_1; const d1_2 = a1_0 * p2_0 + a1_1 * p2_1 + a1_2 * p2_2; const d2_0 = a2_0 * p0_0 + a2_1 * p1_0 + a2_2 * p2_0; const d2_1 = a2_0 * p1_0 + a2_1 * p1_1 + a2_2 * p2_1; const d2_2 = a2_0 * p2_0 + a2_1 * p2_1 + a2_2 * p2_2;
p0_0 = q0_0 + d0_0 * a0_0 + d0_1 * a0_1 + d0_2 * a0_2; p1_0 = q1_0 + d1_0 * a0_0 + d1_1 * a0_1 + d1_2 * a0_2; p1_1 = q1_1 + d1_0 * a1_0 + d1_1 * a1_1 + d1_2 * a1_2; p2_0 = q2_0 + d2_0 * a0_0 + d2_1 * a0_1 + d2_2 * a0_2; p2_1 = q2_1 + d2_0 * a1_0 + d2_1 * a1_1 + d2_2 * a1_2; p2_2 = q2_2 + d2_0 * a2_0 + d2_1 * a2_1 + d2_2 * a2_2;
}
let nisHere = 0, taken = 0, at = (k - work.yStart) * m;
for (let j = 0, c = 0; j < m; j++, c += 3) {
const d = y[at++]!;
if (d !== d) continue;
const r = R[j]!;
const c0 = C[c]!; const c1 = C[c + 1]!; const c2 = C[c + 2]!;
const t0 = p0_0 * c0 + p1_0 * c1 + p2_0 * c2; const t1 = p1_0 * c0 + p1_1 * c1 + p2_1 * c2; const t2 = p2_0 * c0 + p2_1 * c1 + p2_2 * c2;
const S = r + c0 * t0 + c1 * t1 + c2 * t2;
const w = 1 / S, v = d - (c0 * x0 + c1 * x1 + c2 * x2);
nisHere += v * v * w; product *= S; taken++;
if (wantWhite) white[k * m + j] = v * Math.sqrt(w);
const l0 = t0 * w; const l1 = t1 * w; const l2 = t2 * w;
x0 += l0 * v; x1 += l1 * v; x2 += l2 * v;
const m0_0 = p0_0 - l0 * t0; const m0_1 = p1_0 - l0 * t1; const m0_2 = p2_0 - l0 * t2; const m1_0 = p1_0 - l1 * t0; const m1_1 = p1_1 - l1 * t1; const m1_2 = p2_1 - l1 * t2; const m2_0 = p2_0 - l2 * t0; const m2_1 = p2_1 - l2 * t1; const m2_2 = p2_2 - l2 * t2;
const g0 = m0_0 * c0 + m0_1 * c1 + m0_2 * c2 - r * l0; const g1 = m1_0 * c0 + m1_1 * c1 + m1_2 * c2 - r * l1; const g2 = m2_0 * c0 + m2_1 * c1 + m2_2 * c2 - r * l2;
p0_0 = m0_0 - g0 * l0; p1_0 = m1_0 - g1 * l0; p1_1 = m1_1 - g1 * l1; p2_0 = m2_0 - g2 * l0; p2_1 = m2_1 - g2 * l1; p2_2 = m2_2 - g2 * l2;
}
if (wantNis) nis[k] = taken > 0 ? nisHere : NaN;
readings += taken; quad += nisHere;
if (product > 1e100 || product < 1e-100) { logDet += Math.log(product); product = 1; }
let e = h0 * x0 + h1 * x1 + h2 * x2;
for (let j = 0, b = k * p; j < p; j++) e += F[j]! * u[b++]!;
z[k] = e; check += e - e;
if (wantSd) {
const e0 = p0_0 * h0 + p1_0 * h1 + p2_0 * h2; const e1 = p1_0 * h0 + p1_1 * h1 + p2_1 * h2; const e2 = p2_0 * h0 + p2_1 * h1 + p2_2 * h2;
const variance = h0 * e0 + h1 * e1 + h2 * e2;
sd[k] = variance > 0 ? Math.sqrt(variance) : 0; check += variance - variance; }
}
x[0] = x0; x[1] = x1; x[2] = x2;
P[0] = p0_0; P[3] = p1_0; P[1] = p1_0; P[4] = p1_1; P[6] = p2_0; P[2] = p2_0; P[7] = p2_1; P[5] = p2_1; P[8] = p2_2;
sums[0]! += readings; sums[1]! += logDet + Math.log(product); sums[2]! += quad; sums[3]! += check;
}

/** Fixed-gain filter for 3 states and 1 reading; see SteadyKernel in work.ts. */
// prettier-ignore
export function steady3x1(work: FilterWork, steady: SteadyWork, from: number, to: number): number {
const { x, u, y, z, nis, white, p, sums } = work;
const { M, B, K, W, H, G, F, present, absent, stride } = steady;
const m0_0 = M[0]!; const m0_1 = M[1]!; const m0_2 = M[2]!; const m1_0 = M[3]!; const m1_1 = M[4]!; const m1_2 = M[5]!; const m2_0 = M[6]!; const m2_1 = M[7]!; const m2_2 = M[8]!;
const k0_0 = K[0]!; const k0_1 = K[1]!; const k0_2 = K[2]!;
const w0_0 = W[0]!;
const h0 = H[0]!; const h1 = H[1]!; const h2 = H[2]!;
const g0 = G[0]!, o0 = present[0]!;
const one = p > 0, two = p > 1, r0 = one ? F[0]! : 0, r1 = two ? F[1]! : 0;
const b0_0 = one ? B[0]! : 0, b1_0 = two ? B[3]! : 0; const b0_1 = one ? B[1]! : 0, b1_1 = two ? B[4]! : 0; const b0_2 = one ? B[2]! : 0, b1_2 = two ? B[5]! : 0;
let x0 = x[0]!; let x1 = x[1]!; let x2 = x[2]!;
const missing = absent.length, wantNis = nis.length > 0, wantWhite = white.length > 0, scored = steady.scored;
let quad = 0, check = 0, k = from, at = (from - work.yStart) * stride, ku = from * p;
for (; k < to; k++, at += stride) {
const y0 = y[at + o0]!;
if (y0 !== y0) break;
if (missing > 0) { let i = 0; while (i < missing && y[at + absent[i]!] !== y[at + absent[i]!]) i++; if (i < missing) break; }
const v0 = y0 - x0;
if (scored) { const s0 = w0_0 * v0; const q = s0 * s0; quad += q; if (wantNis) nis[k] = q; if (wantWhite) { white[k * stride + o0] = s0; } }
let e = (h0 * x0 + h1 * x1 + h2 * x2) + (g0 * v0);
let f0 = (m0_0 * x0 + m0_1 * x1 + m0_2 * x2) + (k0_0 * y0); let f1 = (m1_0 * x0 + m1_1 * x1 + m1_2 * x2) + (k0_1 * y0); let f2 = (m2_0 * x0 + m2_1 * x1 + m2_2 * x2) + (k0_2 * y0);
const u0 = one ? u[ku]! : 0, u1 = two ? u[ku + 1]! : 0; e += r0 * u0 + r1 * u1;
f0 += b0_0 * u0 + b1_0 * u1; f1 += b0_1 * u0 + b1_1 * u1; f2 += b0_2 * u0 + b1_2 * u1;
for (let j = 2, b = 6; j < p; j++, b += 3) { const w = u[ku + j]!; e += F[j]! * w; f0 += B[b]! * w; f1 += B[b + 1]! * w; f2 += B[b + 2]! * w; }
ku += p;
z[k] = e; check += e - e;
x0 = f0; x1 = f1; x2 = f2;
}
x[0] = x0; x[1] = x1; x[2] = x2;
sums[2]! += quad; sums[3]! += check;
return k;
}

/** Fixed-gain filter for 3 states and 2 readings; see SteadyKernel in work.ts. */
// prettier-ignore
export function steady3x2(work: FilterWork, steady: SteadyWork, from: number, to: number): number {
const { x, u, y, z, nis, white, p, sums } = work;
const { M, B, K, W, H, G, F, present, absent, stride } = steady;
const m0_0 = M[0]!; const m0_1 = M[1]!; const m0_2 = M[2]!; const m1_0 = M[3]!; const m1_1 = M[4]!; const m1_2 = M[5]!; const m2_0 = M[6]!; const m2_1 = M[7]!; const m2_2 = M[8]!;
const k0_0 = K[0]!; const k0_1 = K[1]!; const k0_2 = K[2]!; const k1_0 = K[3]!; const k1_1 = K[4]!; const k1_2 = K[5]!;
const w0_0 = W[0]!; const w1_0 = W[1]!; const w2_0 = W[2]!;
const h0 = H[0]!; const h1 = H[1]!; const h2 = H[2]!;
const g0 = G[0]!, o0 = present[0]!; const g1 = G[1]!, o1 = present[1]!;
const one = p > 0, two = p > 1, r0 = one ? F[0]! : 0, r1 = two ? F[1]! : 0;
const b0_0 = one ? B[0]! : 0, b1_0 = two ? B[3]! : 0; const b0_1 = one ? B[1]! : 0, b1_1 = two ? B[4]! : 0; const b0_2 = one ? B[2]! : 0, b1_2 = two ? B[5]! : 0;
let x0 = x[0]!; let x1 = x[1]!; let x2 = x[2]!;
const missing = absent.length, wantNis = nis.length > 0, wantWhite = white.length > 0, scored = steady.scored;
let quad = 0, check = 0, k = from, at = (from - work.yStart) * stride, ku = from * p;
for (; k < to; k++, at += stride) {
const y0 = y[at + o0]!; const y1 = y[at + o1]!;
if (y0 !== y0 || y1 !== y1) break;
if (missing > 0) { let i = 0; while (i < missing && y[at + absent[i]!] !== y[at + absent[i]!]) i++; if (i < missing) break; }
const v0 = y0 - x0; const v1 = y1 - x1;
if (scored) { const s0 = w0_0 * v0; const s1 = w1_0 * v0 + w2_0 * v1; const q = s0 * s0 + s1 * s1; quad += q; if (wantNis) nis[k] = q; if (wantWhite) { white[k * stride + o0] = s0; white[k * stride + o1] = s1; } }
let e = (h0 * x0 + h1 * x1 + h2 * x2) + (g0 * v0 + g1 * v1);
let f0 = (m0_0 * x0 + m0_1 * x1 + m0_2 * x2) + (k0_0 * y0 + k1_0 * y1); let f1 = (m1_0 * x0 + m1_1 * x1 + m1_2 * x2) + (k0_1 * y0 + k1_1 * y1); let f2 = (m2_0 * x0 + m2_1 * x1 + m2_2 * x2) + (k0_2 * y0 + k1_2 * y1);
const u0 = one ? u[ku]! : 0, u1 = two ? u[ku + 1]! : 0; e += r0 * u0 + r1 * u1;
f0 += b0_0 * u0 + b1_0 * u1; f1 += b0_1 * u0 + b1_1 * u1; f2 += b0_2 * u0 + b1_2 * u1;
for (let j = 2, b = 6; j < p; j++, b += 3) { const w = u[ku + j]!; e += F[j]! * w; f0 += B[b]! * w; f1 += B[b + 1]! * w; f2 += B[b + 2]! * w; }
ku += p;
z[k] = e; check += e - e;
x0 = f0; x1 = f1; x2 = f2;
}
x[0] = x0; x[1] = x1; x[2] = x2;
sums[2]! += quad; sums[3]! += check;
return k;
}

/** Fixed-gain filter for 3 states and 3 readings; see SteadyKernel in work.ts. */
// prettier-ignore
export function steady3x3(work: FilterWork, steady: SteadyWork, from: number, to: number): number {
const { x, u, y, z, nis, white, p, sums } = work;
const { M, B, K, W, H, G, F, present, absent, stride } = steady;
const m0_0 = M[0]!; const m0_1 = M[1]!; const m0_2 = M[2]!; const m1_0 = M[3]!; const m1_1 = M[4]!; const m1_2 = M[5]!; const m2_0 = M[6]!; const m2_1 = M[7]!; const m2_2 = M[8]!;
const k0_0 = K[0]!; const k0_1 = K[1]!; const k0_2 = K[2]!; const k1_0 = K[3]!; const k1_1 = K[4]!; const k1_2 = K[5]!; const k2_0 = K[6]!; const k2_1 = K[7]!; const k2_2 = K[8]!;
const w0_0 = W[0]!; const w1_0 = W[1]!; const w2_0 = W[2]!; const w3_0 = W[3]!; const w4_0 = W[4]!; const w5_0 = W[5]!;
const h0 = H[0]!; const h1 = H[1]!; const h2 = H[2]!;
const g0 = G[0]!, o0 = present[0]!; const g1 = G[1]!, o1 = present[1]!; const g2 = G[2]!, o2 = present[2]!;
const one = p > 0, two = p > 1, r0 = one ? F[0]! : 0, r1 = two ? F[1]! : 0;
const b0_0 = one ? B[0]! : 0, b1_0 = two ? B[3]! : 0; const b0_1 = one ? B[1]! : 0, b1_1 = two ? B[4]! : 0; const b0_2 = one ? B[2]! : 0, b1_2 = two ? B[5]! : 0;
let x0 = x[0]!; let x1 = x[1]!; let x2 = x[2]!;
const missing = absent.length, wantNis = nis.length > 0, wantWhite = white.length > 0, scored = steady.scored;
let quad = 0, check = 0, k = from, at = (from - work.yStart) * stride, ku = from * p;
for (; k < to; k++, at += stride) {
const y0 = y[at + o0]!; const y1 = y[at + o1]!; const y2 = y[at + o2]!;
if (y0 !== y0 || y1 !== y1 || y2 !== y2) break;
if (missing > 0) { let i = 0; while (i < missing && y[at + absent[i]!] !== y[at + absent[i]!]) i++; if (i < missing) break; }
const v0 = y0 - x0; const v1 = y1 - x1; const v2 = y2 - x2;
if (scored) { const s0 = w0_0 * v0; const s1 = w1_0 * v0 + w2_0 * v1; const s2 = w3_0 * v0 + w4_0 * v1 + w5_0 * v2; const q = s0 * s0 + s1 * s1 + s2 * s2; quad += q; if (wantNis) nis[k] = q; if (wantWhite) { white[k * stride + o0] = s0; white[k * stride + o1] = s1; white[k * stride + o2] = s2; } }
let e = (h0 * x0 + h1 * x1 + h2 * x2) + (g0 * v0 + g1 * v1 + g2 * v2);
let f0 = (m0_0 * x0 + m0_1 * x1 + m0_2 * x2) + (k0_0 * y0 + k1_0 * y1 + k2_0 * y2); let f1 = (m1_0 * x0 + m1_1 * x1 + m1_2 * x2) + (k0_1 * y0 + k1_1 * y1 + k2_1 * y2); let f2 = (m2_0 * x0 + m2_1 * x1 + m2_2 * x2) + (k0_2 * y0 + k1_2 * y1 + k2_2 * y2);
const u0 = one ? u[ku]! : 0, u1 = two ? u[ku + 1]! : 0; e += r0 * u0 + r1 * u1;
f0 += b0_0 * u0 + b1_0 * u1; f1 += b0_1 * u0 + b1_1 * u1; f2 += b0_2 * u0 + b1_2 * u1;
for (let j = 2, b = 6; j < p; j++, b += 3) { const w = u[ku + j]!; e += F[j]! * w; f0 += B[b]! * w; f1 += B[b + 1]! * w; f2 += B[b + 2]! * w; }
ku += p;
z[k] = e; check += e - e;
x0 = f0; x1 = f1; x2 = f2;
}
x[0] = x0; x[1] = x1; x[2] = x2;
sums[2]! += quad; sums[3]! += check;
return k;
}
