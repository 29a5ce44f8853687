import { normalCdf, normalDensity } from './distributions.ts';
import { gaussLegendre } from './gauss-legendre.ts';
import { countRefusal, finiteAnswer } from './input-checks.ts';
import type { Result } from './result.ts';

/**
 * Constants of range and SD charts for subgroups of n normal values: d₂, d₃ mean and SD of the range over σ, c₄ mean of
 * the SD over σ, and the factors formed of them.
 */
export type ChartConstants = {
  d2: number;
  d3: number;
  c4: number;
  A2: number;
  A3: number;
  D3: number;
  D4: number;
  B3: number;
  B4: number;
  E2: number;
};

/** Chart constants for subgroups of n = 2 to 25, by integration (Tippett, Biometrika 17, 1925; Montgomery, SQC, app. VI). */
export function chartConstants(n: number): Result<ChartConstants> {
  const refusal = countRefusal('n', n, 2, 25);
  if (refusal) return refusal;
  const d2 = meanRange(n);
  const d3 = Math.sqrt(meanSquaredRange(n) - d2 * d2);
  const c4 = meanSd(n);
  const sdOfSd = Math.sqrt(1 - c4 * c4);
  return finiteAnswer({
    d2,
    d3,
    c4,
    A2: 3 / (d2 * Math.sqrt(n)),
    A3: 3 / (c4 * Math.sqrt(n)),
    D3: Math.max(0, 1 - (3 * d3) / d2),
    D4: 1 + (3 * d3) / d2,
    B3: Math.max(0, 1 - (3 * sdOfSd) / c4),
    B4: 1 + (3 * sdOfSd) / c4,
    E2: 3 / d2,
  });
}

/** E(range) = ∫ 1 − Φⁿ − (1 − Φ)ⁿ. */
function meanRange(n: number): number {
  const { nodes, weights } = gaussLegendre(120, -9, 9);
  let sum = 0;
  for (const [i, x] of nodes.entries()) {
    sum += weights[i]! * (1 - normalCdf(x) ** n - normalCdf(-x) ** n);
  }
  return sum;
}

/** E(range²) = ∫ w² f(w) dw with f(w) = n(n − 1) ∫ φ(x) φ(x + w) (Φ(x + w) − Φ(x))ⁿ⁻² dx. */
function meanSquaredRange(n: number): number {
  const outer = gaussLegendre(100, 0, 14);
  const inner = gaussLegendre(100, -9, 9);
  let sum = 0;
  for (const [i, w] of outer.nodes.entries()) {
    let density = 0;
    for (const [j, x] of inner.nodes.entries()) {
      density +=
        inner.weights[j]! *
        normalDensity(x) *
        normalDensity(x + w) *
        Math.max(0, normalCdf(x + w) - normalCdf(x)) ** (n - 2);
    }
    sum += outer.weights[i]! * w * w * n * (n - 1) * density;
  }
  return sum;
}

/** c₄ = √(2/(n − 1)) Γ(n/2)/Γ((n − 1)/2), from c₄(2) = √(2/π) by Γ(n/2)/Γ((n − 1)/2) · Γ((n − 1)/2)/Γ(n/2 − 1) = (n − 2)/2. */
function meanSd(n: number): number {
  let ratio = 1 / Math.sqrt(Math.PI);
  for (let m = 3; m <= n; m++) ratio = (m - 2) / 2 / ratio;
  return Math.sqrt(2 / (n - 1)) * ratio;
}
