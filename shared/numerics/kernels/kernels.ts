import { filterGeneral, steadyGeneral } from './general-kernels.ts';
import { filter1, steady1x1 } from './generated/states-1.ts';
import { filter2, steady2x1, steady2x2 } from './generated/states-2.ts';
import { filter3, steady3x1, steady3x2, steady3x3 } from './generated/states-3.ts';
import { filter4, steady4x1, steady4x2, steady4x3 } from './generated/states-4.ts';
import { filter5, steady5x1, steady5x2, steady5x3 } from './generated/states-5.ts';
import { filter6, steady6x1, steady6x2, steady6x3 } from './generated/states-6.ts';
import { filter7, steady7x1, steady7x2, steady7x3 } from './generated/states-7.ts';
import { filter8, steady8x1, steady8x2, steady8x3 } from './generated/states-8.ts';
import type { FilterKernel, SteadyKernel } from './work.ts';

const filters: readonly (FilterKernel | undefined)[] = [
  undefined,
  filter1,
  filter2,
  filter3,
  filter4,
  filter5,
  filter6,
  filter7,
  filter8,
];

const steadies: readonly (readonly (SteadyKernel | undefined)[])[] = [
  [],
  [undefined, steady1x1],
  [undefined, steady2x1, steady2x2],
  [undefined, steady3x1, steady3x2, steady3x3],
  [undefined, steady4x1, steady4x2, steady4x3],
  [undefined, steady5x1, steady5x2, steady5x3],
  [undefined, steady6x1, steady6x2, steady6x3],
  [undefined, steady7x1, steady7x2, steady7x3],
  [undefined, steady8x1, steady8x2, steady8x3],
];

/** Time-varying filter kernel for n states: unrolled up to 8, loops beyond. */
export function filterKernelFor(n: number): FilterKernel {
  return filters[n] ?? filterGeneral;
}

/** Fixed-gain kernel for n states and m readings with C = [I 0]: unrolled up to 8 × 3, loops beyond (these take any C). */
export function steadyKernelFor(n: number, m: number): SteadyKernel {
  return steadies[n]?.[m] ?? steadyGeneral;
}
