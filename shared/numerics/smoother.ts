import { Matrix, pseudoInverse } from 'ml-matrix';
import { attempt, giveUp } from './attempt.ts';
import type { FilterStep, Gaussian } from './kalman.ts';
import { finiteOrRefuse, symmetrise } from './linear-algebra.ts';
import type { Result } from './result.ts';

/** Mean and covariance of every step given all readings of the run. */
export type Smoothed = { x: number[]; P: number[][] };

/**
 * Fixed-interval smoother of Rauch, Tung & Striebel (AIAA J. 3 (1965) 1445–1450) over the steps of a filter run:
 * G = P[k|k] Aᵀ P[k+1|k]⁻¹, x[k|N] = x[k|k] + G (x[k+1|N] − x[k+1|k]), P[k|N] = P[k|k] + G (P[k+1|N] − P[k+1|k]) Gᵀ.
 * Where P[k+1|k] is singular (states without noise) its pseudo-inverse serves. Refuses `not-enough-data`.
 */
export function smooth(steps: FilterStep[]): Result<{ steps: Smoothed[] }> {
  return attempt(() => {
    if (!Array.isArray(steps)) return giveUp('wrong-shape', { field: 'steps' });
    const last = steps[steps.length - 1];
    if (!last) return giveUp('not-enough-data', { field: 'steps', needed: 1, got: 0 });
    if (!steps.every(isStep)) return giveUp('wrong-shape', { field: 'steps' });
    let ahead: Gaussian = last.filtered;
    const smoothed = [rows(ahead)];
    for (let k = steps.length - 2; k >= 0; k--) {
      ahead = smoothStep(steps[k]!, steps[k + 1]!.predicted, ahead);
      smoothed.push(rows(ahead));
    }
    return { steps: smoothed.reverse() };
  });
}

function isStep(step: FilterStep): boolean {
  const parts: unknown[] = [
    step?.A,
    step?.predicted?.x,
    step?.predicted?.P,
    step?.filtered?.x,
    step?.filtered?.P,
  ];
  return parts.every((part) => part instanceof Matrix);
}

function smoothStep({ filtered, A }: FilterStep, predicted: Gaussian, ahead: Gaussian): Gaussian {
  const G = filtered.P.mmul(A.transpose()).mmul(scaledInverse(predicted.P));
  const change = Matrix.sub(ahead.P, predicted.P);
  return {
    x: Matrix.add(filtered.x, G.mmul(Matrix.sub(ahead.x, predicted.x))),
    P: symmetrise(Matrix.add(filtered.P, G.mmul(change).mmul(G.transpose()))),
  };
}

/** (Pseudo-)inverse of a covariance, taken of its correlation matrix so that the units of the states do not matter. */
function scaledInverse(P: Matrix): Matrix {
  const scale = P.diagonal().map((d) => (d > 0 ? 1 / Math.sqrt(d) : 0));
  const D = Matrix.diag(scale);
  const correlation = symmetrise(D.mmul(finiteOrRefuse(P, 'P')).mmul(D));
  return D.mmul(pseudoInverse(correlation, 1e-13)).mmul(D);
}

function rows({ x, P }: Gaussian): Smoothed {
  return { x: x.to1DArray(), P: P.to2DArray() };
}
