/** Nodes and weights of an integration rule. */
export type QuadratureRule = { nodes: Float64Array; weights: Float64Array };

/**
 * Gauss-Legendre rule with `count` nodes on [low, high]: Newton's method on the Legendre polynomial from Tricomi's start
 * (Abramowitz & Stegun 25.4.30). Exact for polynomials up to degree 2·count − 1.
 */
export function gaussLegendre(count: number, low: number, high: number): QuadratureRule {
  const nodes = new Float64Array(count);
  const weights = new Float64Array(count);
  const half = (high - low) / 2;
  const middle = (high + low) / 2;
  for (let i = 0; i < count; i++) {
    let x = Math.cos((Math.PI * (i + 0.75)) / (count + 0.5));
    let derivative = 1;
    for (let step = 0; step < 100; step++) {
      let previous = 1;
      let value = x;
      for (let k = 2; k <= count; k++) {
        [previous, value] = [value, ((2 * k - 1) * x * value - (k - 1) * previous) / k];
      }
      derivative = (count * (x * value - previous)) / (x * x - 1);
      const move = value / derivative;
      x -= move;
      if (Math.abs(move) < 1e-15) break;
    }
    nodes[i] = middle - half * x;
    weights[i] = (2 * half) / ((1 - x * x) * derivative * derivative);
  }
  return { nodes, weights };
}
