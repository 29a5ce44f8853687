import type { SheetFields } from '../contracts/register.ts';
import type { SamplingPlan } from '../contracts/sampling.ts';

type ImportanceClass = SheetFields['importanceClass'];

const byClass: Record<ImportanceClass, SamplingPlan> = {
  A: { count: 1, per: 'shift' },
  B: { count: 1, per: 'day' },
  C: { count: 1, per: 'week' },
};

/**
 * How often a reference is usually asked for: each shift for class A, each day for B, each week for C (common practice, no source).
 */
export const defaultSamplingPlan = (importanceClass: ImportanceClass): SamplingPlan =>
  byClass[importanceClass];
