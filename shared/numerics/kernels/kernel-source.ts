/*
 * Writes the kernels of one size as TypeScript: the loops over the n states are unrolled into scalars that the engine
 * keeps in registers. The equations are those of kalman.ts; kernel-tests compare both. Readings are taken in one after
 * the other (R is diagonal here), so a missing one is simply left out.
 */

/** Sizes that are unrolled; larger ones run through the loops of general-kernels.ts. */
export const unrolledSizes = [1, 2, 3, 4, 5, 6, 7, 8];

/** Numbers of readings in a step for which the fixed-gain kernel is unrolled. */
export const unrolledReadings = [1, 2, 3];

const range = (count: number) => Array.from({ length: count }, (_, i) => i);
const sum = (terms: string[]) => terms.join(' + ');
const each = (count: number, line: (i: number) => string) => range(count).map(line).join(' ');
/** Pairs (i, j) of the lower triangle. */
const lower = (n: number) => range(n).flatMap((i) => range(i + 1).map((j) => [i, j] as const));
/** Name of an entry of the symmetric P. */
const P = (i: number, j: number) => (i >= j ? `p${i}_${j}` : `p${j}_${i}`);

/** The whole file of size n. */
export function kernelSource(n: number): string {
  const steady = unrolledReadings.filter((m) => m <= n).map((m) => steadyKernel(n, m));
  return [
    '// Written by generate.ts from kernel-source.ts; change those, not this.',
    "import type { FilterWork, SteadyWork } from '../work.ts';",
    '',
    filterKernel(n),
    ...steady,
  ].join('\n');
}

function filterKernel(n: number): string {
  return [
    `/** Time-varying Kalman filter for ${n} ${n === 1 ? 'state' : 'states'}; see FilterKernel in work.ts. */`,
    '// prettier-ignore',
    `export function filter${n}(work: FilterWork, from: number, to: number, predicted: boolean): void {`,
    'const { A, B, C, Q, R, H, F, x, P, u, y, z, sd, nis, white, m, p, sums } = work;',
    each(n * n, (i) => `const a${Math.floor(i / n)}_${i % n} = A[${i}]!;`),
    lower(n)
      .map(([i, j]) => `const q${i}_${j} = Q[${i * n + j}]!;`)
      .join(' '),
    each(n, (i) => `const h${i} = H[${i}]!;`),
    each(n, (i) => `let x${i} = x[${i}]!;`),
    lower(n)
      .map(([i, j]) => `let ${P(i, j)} = P[${i * n + j}]!;`)
      .join(' '),
    'const wantNis = nis.length > 0, wantSd = sd.length > 0, wantWhite = white.length > 0;',
    'let readings = 0, logDet = 0, quad = 0, product = 1, check = 0, skip = predicted;',
    'for (let k = from; k < to; k++) {',
    'if (skip) { skip = false; } else {',
    ...timeUpdate(n),
    '}',
    'let nisHere = 0, taken = 0, at = (k - work.yStart) * m;',
    `for (let j = 0, c = 0; j < m; j++, c += ${n}) {`,
    'const d = y[at++]!;',
    'if (d !== d) continue;',
    ...measurementUpdate(n),
    '}',
    'if (wantNis) nis[k] = taken > 0 ? nisHere : NaN;',
    'readings += taken; quad += nisHere;',
    'if (product > 1e100 || product < 1e-100) { logDet += Math.log(product); product = 1; }',
    `let e = ${sum(range(n).map((i) => `h${i} * x${i}`))};`,
    'for (let j = 0, b = k * p; j < p; j++) e += F[j]! * u[b++]!;',
    'z[k] = e; check += e - e;',
    'if (wantSd) {',
    each(n, (i) => `const e${i} = ${sum(range(n).map((l) => `${P(i, l)} * h${l}`))};`),
    `const variance = ${sum(range(n).map((i) => `h${i} * e${i}`))};`,
    'sd[k] = variance > 0 ? Math.sqrt(variance) : 0; check += variance - variance; }',
    '}',
    each(n, (i) => `x[${i}] = x${i};`),
    lower(n)
      .map(([i, j]) => `P[${i * n + j}] = ${P(i, j)};${i === j ? '' : ` P[${j * n + i}] = ${P(i, j)};`}`)
      .join(' '),
    'sums[0]! += readings; sums[1]! += logDet + Math.log(product); sums[2]! += quad; sums[3]! += check;',
    '}',
    '',
  ].join('\n');
}

/** x = A x + B u[k−1]; P = A P Aᵀ + Q. */
function timeUpdate(n: number): string[] {
  return [
    each(n, (i) => `let f${i} = ${sum(range(n).map((l) => `a${i}_${l} * x${l}`))};`),
    `for (let j = 0, b = 0, i = (k - 1) * p; j < p; j++, b += ${n}) { const w = u[i++]!; ` +
      `${each(n, (i) => `f${i} += B[b${i === 0 ? '' : ` + ${i}`}]! * w;`)} }`,
    each(n, (i) => `x${i} = f${i};`),
    each(n * n, (at) => {
      const [i, l] = [Math.floor(at / n), at % n];
      return `const d${i}_${l} = ${sum(range(n).map((o) => `a${i}_${o} * ${P(o, l)}`))};`;
    }),
    lower(n)
      .map(([i, j]) => `${P(i, j)} = q${i}_${j} + ${sum(range(n).map((l) => `d${i}_${l} * a${j}_${l}`))};`)
      .join(' '),
  ];
}

/**
 * One reading d = c x + v, var v = r: t = P cᵀ, S = c t + r, l = t/S, x += l v, and Joseph's form
 * P = (I − l c) P (I − l c)ᵀ + r l lᵀ = M − (M cᵀ − r l) lᵀ with M = P − l tᵀ.
 */
function measurementUpdate(n: number): string[] {
  return [
    'const r = R[j]!;',
    each(n, (i) => `const c${i} = C[c${i === 0 ? '' : ` + ${i}`}]!;`),
    each(n, (i) => `const t${i} = ${sum(range(n).map((l) => `${P(i, l)} * c${l}`))};`),
    `const S = r + ${sum(range(n).map((l) => `c${l} * t${l}`))};`,
    `const w = 1 / S, v = d - (${sum(range(n).map((l) => `c${l} * x${l}`))});`,
    'nisHere += v * v * w; product *= S; taken++;',
    'if (wantWhite) white[k * m + j] = v * Math.sqrt(w);',
    each(n, (i) => `const l${i} = t${i} * w;`),
    each(n, (i) => `x${i} += l${i} * v;`),
    each(n * n, (at) => {
      const [i, l] = [Math.floor(at / n), at % n];
      return `const m${i}_${l} = ${P(i, l)} - l${i} * t${l};`;
    }),
    each(n, (i) => `const g${i} = ${sum(range(n).map((l) => `m${i}_${l} * c${l}`))} - r * l${i};`),
    lower(n)
      .map(([i, l]) => `${P(i, l)} = m${i}_${l} - g${i} * l${l};`)
      .join(' '),
  ];
}

/**
 * x = (A − K C) x + K y + B u with x predicted, in coordinates whose first states are the predicted readings: v = y − x;
 * z = H x + G v + F u.
 */
function steadyKernel(n: number, m: number): string {
  const entries = (name: string, count: number, width: number) =>
    each(count, (i) => `const ${name.toLowerCase()}${Math.floor(i / width)}_${i % width} = ${name}[${i}]!;`);
  const white = (i: number) => sum(range(i + 1).map((j) => `w${(i * (i + 1)) / 2 + j}_0 * v${j}`));
  return [
    `/** Fixed-gain filter for ${n} ${n === 1 ? 'state' : 'states'} and ${m} ${m === 1 ? 'reading' : 'readings'}; see SteadyKernel in work.ts. */`,
    '// prettier-ignore',
    `export function steady${n}x${m}(work: FilterWork, steady: SteadyWork, from: number, to: number): number {`,
    'const { x, u, y, z, nis, white, p, sums } = work;',
    'const { M, B, K, W, H, G, F, present, absent, stride } = steady;',
    entries('M', n * n, n),
    entries('K', m * n, n),
    entries('W', (m * (m + 1)) / 2, 1),
    each(n, (i) => `const h${i} = H[${i}]!;`),
    each(m, (j) => `const g${j} = G[${j}]!, o${j} = present[${j}]!;`),
    // The first two inputs are unrolled as well; most models have no more.
    'const one = p > 0, two = p > 1, r0 = one ? F[0]! : 0, r1 = two ? F[1]! : 0;',
    each(n, (i) => `const b0_${i} = one ? B[${i}]! : 0, b1_${i} = two ? B[${n + i}]! : 0;`),
    each(n, (i) => `let x${i} = x[${i}]!;`),
    'const missing = absent.length, wantNis = nis.length > 0, wantWhite = white.length > 0, scored = steady.scored;',
    'let quad = 0, check = 0, k = from, at = (from - work.yStart) * stride, ku = from * p;',
    'for (; k < to; k++, at += stride) {',
    each(m, (j) => `const y${j} = y[at + o${j}]!;`),
    `if (${range(m)
      .map((j) => `y${j} !== y${j}`)
      .join(' || ')}) break;`,
    'if (missing > 0) { let i = 0; while (i < missing && y[at + absent[i]!] !== y[at + absent[i]!]) i++; if (i < missing) break; }',
    each(m, (j) => `const v${j} = y${j} - x${j};`),
    `if (scored) { ${each(m, (i) => `const s${i} = ${white(i)};`)} ` +
      `const q = ${sum(range(m).map((i) => `s${i} * s${i}`))}; quad += q; if (wantNis) nis[k] = q; ` +
      `if (wantWhite) { ${each(m, (i) => `white[k * stride + o${i}] = s${i};`)} } }`,
    `let e = (${sum(range(n).map((l) => `h${l} * x${l}`))}) + (${sum(range(m).map((j) => `g${j} * v${j}`))});`,
    each(
      n,
      (i) =>
        `let f${i} = (${sum(range(n).map((l) => `m${i}_${l} * x${l}`))}) + (${sum(range(m).map((j) => `k${j}_${i} * y${j}`))});`,
    ),
    'const u0 = one ? u[ku]! : 0, u1 = two ? u[ku + 1]! : 0; e += r0 * u0 + r1 * u1;',
    each(n, (i) => `f${i} += b0_${i} * u0 + b1_${i} * u1;`),
    `for (let j = 2, b = ${2 * n}; j < p; j++, b += ${n}) { const w = u[ku + j]!; e += F[j]! * w; ` +
      `${each(n, (i) => `f${i} += B[b${i === 0 ? '' : ` + ${i}`}]! * w;`)} }`,
    'ku += p;',
    'z[k] = e; check += e - e;',
    each(n, (i) => `x${i} = f${i};`),
    '}',
    each(n, (i) => `x[${i}] = x${i};`),
    'sums[2]! += quad; sums[3]! += check;',
    'return k;',
    '}',
    '',
  ].join('\n');
}
