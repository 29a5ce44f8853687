/**
 * Regularised incomplete gamma functions for large shape: P(a, x) `lower` and Q(a, x) = 1 − P `upper`, a ≥ 100, x ≥ 0,
 * to about 1e−12. The series below x = a and Lentz's continued fraction above it need some √a terms; the factor
 * xᵃe⁻ˣ/Γ(a + 1) is formed as e^(−a(λ − 1 − ln λ)), λ = x/a, over Stirling's series, so that no digits cancel.
 * Source: Abramowitz & Stegun 6.5.29, 6.5.31, 6.1.41.
 */
export function regularisedGamma(a: number, x: number): { lower: number; upper: number } {
  if (x <= 0) return { lower: 0, upper: 1 };
  if (x < a) {
    const lower = leadingFactor(a, x) * seriesSum(a, x);
    return { lower, upper: 1 - lower };
  }
  const upper = a * leadingFactor(a, x) * continuedFraction(a, x);
  return { lower: 1 - upper, upper };
}

/** xᵃ e⁻ˣ / Γ(a + 1). */
function leadingFactor(a: number, x: number): number {
  const away = x / a - 1;
  const exponent = Math.abs(away) < 0.5 ? away - Math.log1p(away) : away - Math.log(x / a);
  const stirling = 1 / (12 * a) - 1 / (360 * a ** 3) + 1 / (1260 * a ** 5);
  return Math.exp(-a * exponent - stirling) / Math.sqrt(2 * Math.PI * a);
}

/** 1 + x/(a + 1) + x²/((a + 1)(a + 2)) + … */
function seriesSum(a: number, x: number): number {
  let term = 1;
  let sum = 1;
  for (let k = 1; term > 1e-17 * sum; k++) {
    term *= x / (a + k);
    sum += term;
  }
  return sum;
}

/** Γ(a, x) eˣ x⁻ᵃ by Lentz's method. */
function continuedFraction(a: number, x: number): number {
  let b = x + 1 - a;
  let c = 1e300;
  let d = 1 / b;
  let product = d;
  for (let k = 1; k < 1e7; k++) {
    const numerator = -k * (k - a);
    b += 2;
    d = 1 / (numerator * d + b);
    c = b + numerator / c;
    const factor = c * d;
    product *= factor;
    if (Math.abs(factor - 1) < 1e-16) break;
  }
  return product;
}
