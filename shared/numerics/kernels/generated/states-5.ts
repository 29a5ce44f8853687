// Written by generate.ts from kernel-source.ts; change those, not this.
import type { FilterWork, SteadyWork } from '../work.ts';

/** Time-varying Kalman filter for 5 states; see FilterKernel in work.ts. */
// prettier-ignore
export function filter5(work: FilterWork, from: number, to: number, predicted: boolean): void {
const { A, B, C, Q, R, H, F, x, P, u, y, z, sd, nis, white, m, p, sums } = work;
const a0_0 = A[0]!; const a0_1 = A[1]!; const a0_2 = A[2]!; const a0_3 = A[3]!; const a0_4 = A[4]!; const a1_0 = A[5]!; const a1_1 = A[6]!; const a1_2 = A[7]!; const a1_3 = A[8]!; const a1_4 = A[9]!; const a2_0 = A[10]!; const a2_1 = A[11]!; const a2_2 = A[12]!; const a2_3 = A[13]!; const a2_4 = A[14]!; const a3_0 = A[15]!; const a3_1 = A[16]!; const a3_2 = A[17]!; const a3_3 = A[18]!; const a3_4 = A[19]!; const a4_0 = A[20]!; const a4_1 = A[21]!; const a4_2 = A[22]!; const a4_3 = A[23]!; const a4_4 = A[24]!;
const q0_0 = Q[0]!; const q1_0 = Q[5]!; const q1_1 = Q[6]!; const q2_0 = Q[10]!; const q2_1 = Q[11]!; const q2_2 = Q[12]!; const q3_0 = Q[15]!; const q3_1 = Q[16]!; const q3_2 = Q[17]!; const q3_3 = Q[18]!; const q4_0 = Q[20]!; const q4_1 = Q[21]!; const q4_2 = Q[22]!; const q4_3 = Q[23]!; const q4_4 = Q[24]!;
const h0 = H[0]!; const h1 = H[1]!; const h2 = H[2]!; const h3 = H[3]!; const h4 = H[4]!;
let x0 = x[0]!; let x1 = x[1]!; let x2 = x[2]!; let x3 = x[3]!; let x4 = x[4]!;
let p0_0 = P[0]!; let p1_0 = P[5]!; let p1_1 = P[6]!; let p2_0 = P[10]!; let p2_1 = P[11]!; let p2_2 = P[12]!; let p3_0 = P[15]!; let p3_1 = P[16]!; let p3_2 = P[17]!; let p3_3 = P[18]!; let p4_0 = P[20]!; let p4_1 = P[21]!; let p4_2 = P[22]!; let p4_3 = P[23]!; let p4_4 = P[24]!;
const wantNis = nis.length > 0, wantSd = sd.length > 0, wantWhite = white.length > 0;
let readings = 0, logDet = 0, quad = 0, product = 1, check = 0, skip = predicted;
for (let k = from; k < to; k++) {
if (skip) { skip = false; } else {
let f0 = a0_0 * x0 + a0_1 * x1 + a0_2 * x2 + a0_3 * x3 + a0_4 * x4; let f1 = a1_0 * x0 + a1_1 * x1 + a1_2 * x2 + a1_3 * x3 + a1_4 * x4; let f2 = a2_0 * x0 + a2_1 * x1 + a2_2 * x2 + a2_3 * x3 + a2_4 * x4; let f3 = a3_0 * x0 + a3_1 * x1 + a3_2 * x2 + a3_3 * x3 + a3_4 * x4; let f4 = a4_0 * x0 + a4_1 * x1 + a4_2 * x2 + a4_3 * x3 + a4_4 * x4;
for (let j = 0, b = 0, i = (k - 1) * p; j < p; j++, b += 5) { const w = u[i++]!; f0 += B[b]! * w; f1 += B[b + 1]! * w; f2 += B[b + 2]! * w; f3 += B[b + 3]! * w; f4 += B[b + 4]! * w; }
x0 = f0; x1 = f1; x2 = f2; x3 = f3; x4 = f4;
const d0_0 = a0_0 * p0_0 + a0_1 * p1_0 + a0_2 * p2_0 + a0_3 * p3_0 + a0_4 * p4_0; const d0_1 = a0_0 * p1_0 + a0_1 * p1_1 + a0_2 * p2_1 + a0_3 * p3_1 + a0_4 * p4_1; const d0_2 = a0_0 * p2_0 + a0_1 * p2_1 + a0_2 * p2_2 + a0_3 * p3_2 + a0_4 * p4_2; const d0_3 = a0_0 * p3_0 + a0_1 * p3_1 + a0_2 * p3_2 + a0_3 * p3_3 + a0_4 * p4_3; const d0_4 = a0_0 * p4_0 + a0_1 * p4_1 + a0_2 * p4_2 + a0_3 * p4_3 + a0_4 * p4_4; const d1_0 = a1_0 * p0_0 + a1_1 * p1_0 + a1_2 * p2_0 + a1_3 * p3_0 + a1_4 * p4_0; const d1_1 = a1_0 * p1_0 + a1_1 * p1_1 + a1_2 * p2_1 + a1_3 * p3_1 + a1_4 * p4_1; const d1_2 = a1_0 * p2_0 + a1_1 * p2_1 + a1_2 * p2_2 + a1_3 * p3_2 + a1_4 * p4_2; const d1_3 = a1_0 * p3_0 + a1_1 * p3_1 + a1_2 * p3_2 + a1_3 * p3_3 + a1_4 * p4_3; const d1_4 = a1_0 * p4_0 + a1_1 * p4_1 + a1_2 * p4_2 + a1_3 * p4_3 + a1_4 * p4_4; const d2_0 = a2_0 * p0_0 + a2_1 * p1_0 + a2_2 * p2_0 + a2_3 * p3_0 + a2_4 * p4_0; const d2_1 = a2_0 * p1_0 + a2_1 * p1_1 + a2_2 * p2_1 + a2_3 * p3_1 + a2_4 * p4_1; const d2_2 = a2_0 * p2_0 + a2_1 * p2_1 + a2_2 * p2_2 + a2_3 * p3_2 + a2_4 * p4_2; const d2_3 = a2_0 * p3_0 + a2_1 * p3_1 + a2_2 * p3_2 + a2_3 * p3_3 + a2_4 * p4_3; const d2_4 = a2_0 * p4_0 + a2_1 * p4_1 + a2_2 * p4_2 + a2_3 * p4_3 + a2_4 * p4_4; const d3_0 = a3_0 * p0_0 + a3_1 * p1_0 + a3_2 * p2_0 + a3_3 * p3_0 + a3_4 * p4_0; const d3_1 = a3_0 * p1_0 + a3_1 * p1_1 + a3_2 * p2_1 + a3_3 * p3_1 + a3_4 * p4_1; const d3_2 = a3_0 * p2_0 + a3_1 * p2_1 + a3_2 * p2_2 + a3_3 * p3_2 + a3_4 * p4_2; const d3_3 = a3_0 * p3_0 + a3_1 * p3_1 + a3_2 * p3_2 + a3_3 * p3_3 + a3_4 * p4_3; const d3_4 = a3_0 * p4_0 + a3_1 * p4_1 + a3_2 * p4_2 + a3_3 * p4_3 + a3_4 * p4_4; const d4_0 = a4_0 * p0_0 + a4_1 * p1_0 + a4_2 * p2_0 + a4_3 * p3_0 + a4_4 * p4_0; const d4_1 = a4_0 * p1_0 + a4_1 * p1_1 + a4_2 * p2_1 + a4_3 * p3_1 + a4_4 * p4_1; const d4_2 = a4_0 * p2_0 + a4_1 * p2_1 + a4_2 * p2_2 + a4_3 * p3_2 + a4_4 * p4_2; const d4_3 = a4_0 * p3_0 + a4_1 * p3_1 + a4_2 * p3_2 + a4_3 * p3_3 + a4_4 * p4_3; const d4_4 = a4_0 * p4_0 + a4_1 * p4_1 + a4_2 * p4_2 + a4_3 * p4_3 + a4_4 * p4_4;
p0_0 = q0_0 + d0_0 * a0_0 + d0_1 * a0_1 + d0_2 * a0_2 + d0_3 * a0_3 + d0_4 * a0_4; p1_0 = q1_0 + d1_0 * a0_0 + d1_1 * a0_1 + d1_2 * a0_2 + d1_3 * a0_3 + d1_4 * a0_4; p1_1 = q1_1 + d1_0 * a1_0 + d1_1 * a1_1 + d1_2 * a1_2 + d1_3 * a1_3 + d1_4 * a1_4; p2_0 = q2_0 + d2_0 * a0_0 + d2_1 * a0_1 + d2_2 * a0_2 + d2_3 * a0_3 + d2_4 * a0_4; p2_1 = q2_1 + d2_0 * a1_0 + d2_1 * a1_1 + d2_2 * a1_2 + d2_3 * a1_3 + d2_4 * a1_4; p2_2 = q2_2 + d2_0 * a2_0 + d2_1 * a2_1 + d2_2 * a2_2 + d2_3 * a2_3 + d2_4 * a2_4; p3_0 = q3_0 + d3_0 * a0_0 + d3_1 * a0_1 + d3_2 * a0_2 + d3_3 * a0_3 + d3_4 * a0_4; p3_1 = q3_1 + d3_0 * a1_0 + d3_1 * a1_1 + d3_2 * a1_2 + d3_3 * a1_3 + d3_4 * a1_4; p3_2 = q3_2 + d3_0 * a2_0 + d3_1 * a2_1 + d3_2 * a2_2 + d3_3 * a2_3 + d3_4 * a2_4; p3_3 = q3_3 + d3_0 * a3_0 + d3_1 * a3_1 + d3_2 * a3_2 + d3_3 * a3_3 + d3_4 * a3_4; p4_0 = q4_0 + d4_0 * a0_0 + d4_1 * a0_1 + d4_2 * a0_2 + d4_3 * a0_3 + d4_4 * a0_4; p4_1 = q4_1 + d4_0 * a1_0 + d4_1 * a1_1 + d4_2 * a1_2 + d4_3 * a1_3 + d4_4 * a1_4; p4_2 = q4_2 + d4_0 * a2_0 + d4_1 * a2_1 + d4_2 * a2_2 + d4_3 * a2_3 + d4_4 * a2_4; p4_3 = q4_3 + d4_0 * a3_0 + d4_1 * a3_1 + d4_2 * a3_2 + d4_3 * a3_3 + d4_4 * a3_4; p4_4 = q4_4 + d4_0 * a4_0 + d4_1 * a4_1 + d4_2 * a4_2 + d4_3 * a4_3 + d4_4 * a4_4;
}
let nisHere = 0, taken = 0, at = (k - work.yStart) * m;
for (let j = 0, c = 0; j < m; j++, c += 5) {
const d = y[at++]!;
if (d !== d) continue;
const r = R[j]!;
const c0 = C[c]!; const c1 = C[c + 1]!; const c2 = C[c + 2]!; const c3 = C[c + 3]!; const c4 = C[c + 4]!;
const t0 = p0_0 * c0 + p1_0 * c1 + p2_0 * c2 + p3_0 * c3 + p4_0 * c4; const t1 = p1_0 * c0 + p1_1 * c1 + p2_1 * c2 + p3_1 * c3 + p4_1 * c4; const t2 = p2_0 * c0 + p2_1 * c1 + p2_2 * c2 + p3_2 * c3 + p4_2 * c4; const t3 = p3_0 * c0 + p3_1 * c1 + p3_2 * c2 + p3_3 * c3 + p4_3 * c4; const t4 = p4_0 * c0 + p4_1 * c1 + p4_2 * c2 + p4_3 * c3 + p4_4 * c4;
const S = r + c0 * t0 + c1 * t1 + c2 * t2 + c3 * t3 + c4 * t4;
const w = 1 / S, v = d - (c0 * x0 + c1 * x1 + c2 * x2 + c3 * x3 + c4 * x4);
nisHere += v * v * w; product *= S; taken++;
if (wantWhite) white[k * m + j] = v * Math.sqrt(w);
const l0 = t0 * w; const l1 = t1 * w; const l2 = t2 * w; const l3 = t3 * w; const l4 = t4 * w;
x0 += l0 * v; x1 += l1 * v; x2 += l2 * v; x3 += l3 * v; x4 += l4 * v;
const m0_0 = p0_0 - l0 * t0; const m0_1 = p1_0 - l0 * t1; const m0_2 = p2_0 - l0 * t2; const m0_3 = p3_0 - l0 * t3; const m0_4 = p4_0 - l0 * t4; const m1_0 = p1_0 - l1 * t0; const m1_1 = p1_1 - l1 * t1; const m1_2 = p2_1 - l1 * t2; const m1_3 = p3_1 - l1 * t3; const m1_4 = p4_1 - l1 * t4; const m2_0 = p2_0 - l2 * t0; const m2_1 = p2_1 - l2 * t1; const m2_2 = p2_2 - l2 * t2; const m2_3 = p3_2 - l2 * t3; const m2_4 = p4_2 - l2 * t4; const m3_0 = p3_0 - l3 * t0; const m3_1 = p3_1 - l3 * t1; const m3_2 = p3_2 - l3 * t2; const m3_3 = p3_3 - l3 * t3; const m3_4 = p4_3 - l3 * t4; const m4_0 = p4_0 - l4 * t0; const m4_1 = p4_1 - l4 * t1; const m4_2 = p4_2 - l4 * t2; const m4_3 = p4_3 - l4 * t3; const m4_4 = p4_4 - l4 * t4;
const g0 = m0_0 * c0 + m0_1 * c1 + m0_2 * c2 + m0_3 * c3 + m0_4 * c4 - r * l0; const g1 = m1_0 * c0 + m1_1 * c1 + m1_2 * c2 + m1_3 * c3 + m1_4 * c4 - r * l1; const g2 = m2_0 * c0 + m2_1 * c1 + m2_2 * c2 + m2_3 * c3 + m2_4 * c4 - r * l2; const g3 = m3_0 * c0 + m3_1 * c1 + m3_2 * c2 + m3_3 * c3 + m3_4 * c4 - r * l3; const g4 = m4_0 * c0 + m4_1 * c1 + m4_2 * c2 + m4_3 * c3 + m4_4 * c4 - r * l4;
p0_0 = m0_0 - g0 * l0; p1_0 = m1_0 - g1 * l0; p1_1 = m1_1 - g1 * l1; p2_0 = m2_0 - g2 * l0; p2_1 = m2_1 - g2 * l1; p2_2 = m2_2 - g2 * l2; p3_0 = m3_0 - g3 * l0; p3_1 = m3_1 - g3 * l1; p3_2 = m3_2 - g3 * l2; p3_3 = m3_3 - g3 * l3; p4_0 = m4_0 - g4 * l0; p4_1 = m4_1 - g4 * l1; p4_2 = m4_2 - g4 * l2; p4_3 = m4_3 - g4 * l3; p4_4 = m4_4 - g4 * l4;
}
if (wantNis) nis[k] = taken > 0 ? nisHere : NaN;
readings += taken; quad += nisHere;
if (product > 1e100 || product < 1e-100) { logDet += Math.log(product); product = 1; }
let e = h0 * x0 + h1 * x1 + h2 * x2 + h3 * x3 + h4 * x4;
for (let j = 0, b = k * p; j < p; j++) e += F[j]! * u[b++]!;
z[k] = e; check += e - e;
if (wantSd) {
const e0 = p0_0 * h0 + p1_0 * h1 + p2_0 * h2 + p3_0 * h3 + p4_0 * h4; const e1 = p1_0 * h0 + p1_1 * h1 + p2_1 * h2 + p3_1 * h3 + p4_1 * h4; const e2 = p2_0 * h0 + p2_1 * h1 + p2_2 * h2 + p3_2 * h3 + p4_2 * h4; const e3 = p3_0 * h0 + p3_1 * h1 + p3_2 * h2 + p3_3 * h3 + p4_3 * h4; const e4 = p4_0 * h0 + p4_1 * h1 + p4_2 * h2 + p4_3 * h3 + p4_4 * h4;
const variance = h0 * e0 + h1 * e1 + h2 * e2 + h3 * e3 + h4 * e4;
sd[k] = variance > 0 ? Math.sqrt(variance) : 0; check += variance - variance; }
}
x[0] = x0; x[1] = x1; x[2] = x2; x[3] = x3; x[4] = x4;
P[0] = p0_0; P[5] = p1_0; P[1] = p1_0; P[6] = p1_1; P[10] = p2_0; P[2] = p2_0; P[11] = p2_1; P[7] = p2_1; P[12] = p2_2; P[15] = p3_0; P[3] = p3_0; P[16] = p3_1; P[8] = p3_1; P[17] = p3_2; P[13] = p3_2; P[18] = p3_3; P[20] = p4_0; P[4] = p4_0; P[21] = p4_1; P[9] = p4_1; P[22] = p4_2; P[14] = p4_2; P[23] = p4_3; P[19] = p4_3; P[24] = p4_4;
sums[0]! += readings; sums[1]! += logDet + Math.log(product); sums[2]! += quad; sums[3]! += check;
}

/** Fixed-gain filter for 5 states and 1 reading; see SteadyKernel in work.ts. */
// prettier-ignore
export function steady5x1(work: FilterWork, steady: SteadyWork, from: number, to: number): number {
const { x, u, y, z, nis, white, p, sums } = work;
const { M, B, K, W, H, G, F, present, absent, stride } = steady;
const m0_0 = M[0]!; const m0_1 = M[1]!; const m0_2 = M[2]!; const m0_3 = M[3]!; const m0_4 = M[4]!; const m1_0 = M[5]!; const m1_1 = M[6]!; const m1_2 = M[7]!; const m1_3 = M[8]!; const m1_4 = M[9]!; const m2_0 = M[10]!; const m2_1 = M[11]!; const m2_2 = M[12]!; const m2_3 = M[13]!; const m2_4 = M[14]!; const m3_0 = M[15]!; const m3_1 = M[16]!; const m3_2 = M[17]!; const m3_3 = M[18]!; const m3_4 = M[19]!; const m4_0 = M[20]!; const m4_1 = M[21]!; const m4_2 = M[22]!; const m4_3 = M[23]!; const m4_4 = M[24]!;
const k0_0 = K[0]!; const k0_1 = K[1]!; const k0_2 = K[2]!; const k0_3 = K[3]!; const k0_4 = K[4]!;
const w0_0 = W[0]!;
const h0 = H[0]!; const h1 = H[1]!; const h2 = H[2]!; const h3 = H[3]!; const h4 = H[4]!;
const g0 = G[0]!, o0 = present[0]!;
const one = p > 0, two = p > 1, r0 = one ? F[0]! : 0, r1 = two ? F[1]! : 0;
const b0_0 = one ? B[0]! : 0, b1_0 = two ? B[5]! : 0; const b0_1 = one ? B[1]! : 0, b1_1 = two ? B[6]! : 0; const b0_2 = one ? B[2]! : 0, b1_2 = two ? B[7]! : 0; const b0_3 = one ? B[3]! : 0, b1_3 = two ? B[8]! : 0; const b0_4 = one ? B[4]! : 0, b1_4 = two ? B[9]! : 0;
let x0 = x[0]!; let x1 = x[1]!; let x2 = x[2]!; let x3 = x[3]!; let x4 = x[4]!;
const missing = absent.length, wantNis = nis.length > 0, wantWhite = white.length > 0, scored = steady.scored;
let quad = 0, check = 0, k = from, at = (from - work.yStart) * stride, ku = from * p;
for (; k < to; k++, at += stride) {
const y0 = y[at + o0]!;
if (y0 !== y0) break;
if (missing > 0) { let i = 0; while (i < missing && y[at + absent[i]!] !== y[at + absent[i]!]) i++; if (i < missing) break; }
const v0 = y0 - x0;
if (scored) { const s0 = w0_0 * v0; const q = s0 * s0; quad += q; if (wantNis) nis[k] = q; if (wantWhite) { white[k * stride + o0] = s0; } }
let e = (h0 * x0 + h1 * x1 + h2 * x2 + h3 * x3 + h4 * x4) + (g0 * v0);
let f0 = (m0_0 * x0 + m0_1 * x1 + m0_2 * x2 + m0_3 * x3 + m0_4 * x4) + (k0_0 * y0); let f1 = (m1_0 * x0 + m1_1 * x1 + m1_2 * x2 + m1_3 * x3 + m1_4 * x4) + (k0_1 * y0); let f2 = (m2_0 * x0 + m2_1 * x1 + m2_2 * x2 + m2_3 * x3 + m2_4 * x4) + (k0_2 * y0); let f3 = (m3_0 * x0 + m3_1 * x1 + m3_2 * x2 + m3_3 * x3 + m3_4 * x4) + (k0_3 * y0); let f4 = (m4_0 * x0 + m4_1 * x1 + m4_2 * x2 + m4_3 * x3 + m4_4 * x4) + (k0_4 * y0);
const u0 = one ? u[ku]! : 0, u1 = two ? u[ku + 1]! : 0; e += r0 * u0 + r1 * u1;
f0 += b0_0 * u0 + b1_0 * u1; f1 += b0_1 * u0 + b1_1 * u1; f2 += b0_2 * u0 + b1_2 * u1; f3 += b0_3 * u0 + b1_3 * u1; f4 += b0_4 * u0 + b1_4 * u1;
for (let j = 2, b = 10; j < p; j++, b += 5) { const w = u[ku + j]!; e += F[j]! * w; f0 += B[b]! * w; f1 += B[b + 1]! * w; f2 += B[b + 2]! * w; f3 += B[b + 3]! * w; f4 += B[b + 4]! * w; }
ku += p;
z[k] = e; check += e - e;
x0 = f0; x1 = f1; x2 = f2; x3 = f3; x4 = f4;
}
x[0] = x0; x[1] = x1; x[2] = x2; x[3] = x3; x[4] = x4;
sums[2]! += quad; sums[3]! += check;
return k;
}

/** Fixed-gain filter for 5 states and 2 readings; see SteadyKernel in work.ts. */
// prettier-ignore
export function steady5x2(work: FilterWork, steady: SteadyWork, from: number, to: number): number {
const { x, u, y, z, nis, white, p, sums } = work;
const { M, B, K, W, H, G, F, present, absent, stride } = steady;
const m0_0 = M[0]!; const m0_1 = M[1]!; const m0_2 = M[2]!; const m0_3 = M[3]!; const m0_4 = M[4]!; const m1_0 = M[5]!; const m1_1 = M[6]!; const m1_2 = M[7]!; const m1_3 = M[8]!; const m1_4 = M[9]!; const m2_0 = M[10]!; const m2_1 = M[11]!; const m2_2 = M[12]!; const m2_3 = M[13]!; const m2_4 = M[14]!; const m3_0 = M[15]!; const m3_1 = M[16]!; const m3_2 = M[17]!; const m3_3 = M[18]!; const m3_4 = M[19]!; const m4_0 = M[20]!; const m4_1 = M[21]!; const m4_2 = M[22]!; const m4_3 = M[23]!; const m4_4 = M[24]!;
const k0_0 = K[0]!; const k0_1 = K[1]!; const k0_2 = K[2]!; const k0_3 = K[3]!; const k0_4 = K[4]!; const k1_0 = K[5]!; const k1_1 = K[6]!; const k1_2 = K[7]!; const k1_3 = K[8]!; const k1_4 = K[9]!;
const w0_0 = W[0]!; const w1_0 = W[1]!; const w2_0 = W[2]!;
const h0 = H[0]!; const h1 = H[1]!; const h2 = H[2]!; const h3 = H[3]!; const h4 = H[4]!;
const g0 = G[0]!, o0 = present[0]!; const g1 = G[1]!, o1 = present[1]!;
const one = p > 0, two = p > 1, r0 = one ? F[0]! : 0, r1 = two ? F[1]! : 0;
const b0_0 = one ? B[0]! : 0, b1_0 = two ? B[5]! : 0; const b0_1 = one ? B[1]! : 0, b1_1 = two ? B[6]! : 0; const b0_2 = one ? B[2]! : 0, b1_2 = two ? B[7]! : 0; const b0_3 = one ? B[3]! : 0, b1_3 = two ? B[8]! : 0; const b0_4 = one ? B[4]! : 0, b1_4 = two ? B[9]! : 0;
let x0 = x[0]!; let x1 = x[1]!; let x2 = x[2]!; let x3 = x[3]!; let x4 = x[4]!;
const missing = absent.length, wantNis = nis.length > 0, wantWhite = white.length > 0, scored = steady.scored;
let quad = 0, check = 0, k = from, at = (from - work.yStart) * stride, ku = from * p;
for (; k < to; k++, at += stride) {
const y0 = y[at + o0]!; const y1 = y[at + o1]!;
if (y0 !== y0 || y1 !== y1) break;
if (missing > 0) { let i = 0; while (i < missing && y[at + absent[i]!] !== y[at + absent[i]!]) i++; if (i < missing) break; }
const v0 = y0 - x0; const v1 = y1 - x1;
if (scored) { const s0 = w0_0 * v0; const s1 = w1_0 * v0 + w2_0 * v1; const q = s0 * s0 + s1 * s1; quad += q; if (wantNis) nis[k] = q; if (wantWhite) { white[k * stride + o0] = s0; white[k * stride + o1] = s1; } }
let e = (h0 * x0 + h1 * x1 + h2 * x2 + h3 * x3 + h4 * x4) + (g0 * v0 + g1 * v1);
let f0 = (m0_0 * x0 + m0_1 * x1 + m0_2 * x2 + m0_3 * x3 + m0_4 * x4) + (k0_0 * y0 + k1_0 * y1); let f1 = (m1_0 * x0 + m1_1 * x1 + m1_2 * x2 + m1_3 * x3 + m1_4 * x4) + (k0_1 * y0 + k1_1 * y1); let f2 = (m2_0 * x0 + m2_1 * x1 + m2_2 * x2 + m2_3 * x3 + m2_4 * x4) + (k0_2 * y0 + k1_2 * y1); let f3 = (m3_0 * x0 + m3_1 * x1 + m3_2 * x2 + m3_3 * x3 + m3_4 * x4) + (k0_3 * y0 + k1_3 * y1); let f4 = (m4_0 * x0 + m4_1 * x1 + m4_2 * x2 + m4_3 * x3 + m4_4 * x4) + (k0_4 * y0 + k1_4 * y1);
const u0 = one ? u[ku]! : 0, u1 = two ? u[ku + 1]! : 0; e += r0 * u0 + r1 * u1;
f0 += b0_0 * u0 + b1_0 * u1; f1 += b0_1 * u0 + b1_1 * u1; f2 += b0_2 * u0 + b1_2 * u1; f3 += b0_3 * u0 + b1_3 * u1; f4 += b0_4 * u0 + b1_4 * u1;
for (let j = 2, b = 10; j < p; j++, b += 5) { const w = u[ku + j]!; e += F[j]! * w; f0 += B[b]! * w; f1 += B[b + 1]! * w; f2 += B[b + 2]! * w; f3 += B[b + 3]! * w; f4 += B[b + 4]! * w; }
ku += p;
z[k] = e; check += e - e;
x0 = f0; x1 = f1; x2 = f2; x3 = f3; x4 = f4;
}
x[0] = x0; x[1] = x1; x[2] = x2; x[3] = x3; x[4] = x4;
sums[2]! += quad; sums[3]! += check;
return k;
}

/** Fixed-gain filter for 5 states and 3 readings; see SteadyKernel in work.ts. */
// prettier-ignore
export function steady5x3(work: FilterWork, steady: SteadyWork, from: number, to: number): number {
const { x, u, y, z, nis, white, p, sums } = work;
const { M, B, K, W, H, G, F, present, absent, stride } = steady;
const m0_0 = M[0]!; const m0_1 = M[1]!; const m0_2 = M[2]!; const m0_3 = M[3]!; const m0_4 = M[4]!; const m1_0 = M[5]!; const m1_1 = M[6]!; const m1_2 = M[7]!; const m1_3 = M[8]!; const m1_4 = M[9]!; const m2_0 = M[10]!; const m2_1 = M[11]!; const m2_2 = M[12]!; const m2_3 = M[13]!; const m2_4 = M[14]!; const m3_0 = M[15]!; const m3_1 = M[16]!; const m3_2 = M[17]!; const m3_3 = M[18]!; const m3_4 = M[19]!; const m4_0 = M[20]!; const m4_1 = M[21]!; const m4_2 = M[22]!; const m4_3 = M[23]!; const m4_4 = M[24]!;
const k0_0 = K[0]!; const k0_1 = K[1]!; const k0_2 = K[2]!; const k0_3 = K[3]!; const k0_4 = K[4]!; const k1_0 = K[5]!; const k1_1 = K[6]!; const k1_2 = K[7]!; const k1_3 = K[8]!; const k1_4 = K[9]!; const k2_0 = K[10]!; const k2_1 = K[11]!; const k2_2 = K[12]!; const k2_3 = K[13]!; const k2_4 = K[14]!;
const w0_0 = W[0]!; const w1_0 = W[1]!; const w2_0 = W[2]!; const w3_0 = W[3]!; const w4_0 = W[4]!; const w5_0 = W[5]!;
const h0 = H[0]!; const h1 = H[1]!; const h2 = H[2]!; const h3 = H[3]!; const h4 = H[4]!;
const g0 = G[0]!, o0 = present[0]!; const g1 = G[1]!, o1 = present[1]!; const g2 = G[2]!, o2 = present[2]!;
const one = p > 0, two = p > 1, r0 = one ? F[0]! : 0, r1 = two ? F[1]! : 0;
const b0_0 = one ? B[0]! : 0, b1_0 = two ? B[5]! : 0; const b0_1 = one ? B[1]! : 0, b1_1 = two ? B[6]! : 0; const b0_2 = one ? B[2]! : 0, b1_2 = two ? B[7]! : 0; const b0_3 = one ? B[3]! : 0, b1_3 = two ? B[8]! : 0; const b0_4 = one ? B[4]! : 0, b1_4 = two ? B[9]! : 0;
let x0 = x[0]!; let x1 = x[1]!; let x2 = x[2]!; let x3 = x[3]!; let x4 = x[4]!;
const missing = absent.length, wantNis = nis.length > 0, wantWhite = white.length > 0, scored = steady.scored;
let quad = 0, check = 0, k = from, at = (from - work.yStart) * stride, ku = from * p;
for (; k < to; k++, at += stride) {
const y0 = y[at + o0]!; const y1 = y[at + o1]!; const y2 = y[at + o2]!;
if (y0 !== y0 || y1 !== y1 || y2 !== y2) break;
if (missing > 0) { let i = 0; while (i < missing && y[at + absent[i]!] !== y[at + absent[i]!]) i++; if (i < missing) break; }
const v0 = y0 - x0; const v1 = y1 - x1; const v2 = y2 - x2;
if (scored) { const s0 = w0_0 * v0; const s1 = w1_0 * v0 + w2_0 * v1; const s2 = w3_0 * v0 + w4_0 * v1 + w5_0 * v2; const q = s0 * s0 + s1 * s1 + s2 * s2; quad += q; if (wantNis) nis[k] = q; if (wantWhite) { white[k * stride + o0] = s0; white[k * stride + o1] = s1; white[k * stride + o2] = s2; } }
let e = (h0 * x0 + h1 * x1 + h2 * x2 + h3 * x3 + h4 * x4) + (g0 * v0 + g1 * v1 + g2 * v2);
let f0 = (m0_0 * x0 + m0_1 * x1 + m0_2 * x2 + m0_3 * x3 + m0_4 * x4) + (k0_0 * y0 + k1_0 * y1 + k2_0 * y2); let f1 = (m1_0 * x0 + m1_1 * x1 + m1_2 * x2 + m1_3 * x3 + m1_4 * x4) + (k0_1 * y0 + k1_1 * y1 + k2_1 * y2); let f2 = (m2_0 * x0 + m2_1 * x1 + m2_2 * x2 + m2_3 * x3 + m2_4 * x4) + (k0_2 * y0 + k1_2 * y1 + k2_2 * y2); let f3 = (m3_0 * x0 + m3_1 * x1 + m3_2 * x2 + m3_3 * x3 + m3_4 * x4) + (k0_3 * y0 + k1_3 * y1 + k2_3 * y2); let f4 = (m4_0 * x0 + m4_1 * x1 + m4_2 * x2 + m4_3 * x3 + m4_4 * x4) + (k0_4 * y0 + k1_4 * y1 + k2_4 * y2);
const u0 = one ? u[ku]! : 0, u1 = two ? u[ku + 1]! : 0; e += r0 * u0 + r1 * u1;
f0 += b0_0 * u0 + b1_0 * u1; f1 += b0_1 * u0 + b1_1 * u1; f2 += b0_2 * u0 + b1_2 * u1; f3 += b0_3 * u0 + b1_3 * u1; f4 += b0_4 * u0 + b1_4 * u1;
for (let j = 2, b = 10; j < p; j++, b += 5) { const w = u[ku + j]!; e += F[j]! * w; f0 += B[b]! * w; f1 += B[b + 1]! * w; f2 += B[b + 2]! * w; f3 += B[b + 3]! * w; f4 += B[b + 4]! * w; }
ku += p;
z[k] = e; check += e - e;
x0 = f0; x1 = f1; x2 = f2; x3 = f3; x4 = f4;
}
x[0] = x0; x[1] = x1; x[2] = x2; x[3] = x3; x[4] = x4;
sums[2]! += quad; sums[3]! += check;
return k;
}
