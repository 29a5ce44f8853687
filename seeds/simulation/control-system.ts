import type { Random } from '../random.ts';
import type { LaboratoryResult } from './laboratory.ts';

/** An estimate that a control system computes: near the truth, with an error that wanders and noise. */
export interface ControlSystem {
  wander: number;
  hours: number;
  noise: number;
  /** From this day on somebody types in the last difference to the laboratory, whole, after every result. */
  chasedFromDay?: number;
}

/** The estimate step by step, and what becomes of it as results are reported. */
export function controlSystem(of: ControlSystem, stepMs: number, random: Random) {
  const kept = Math.exp(-stepMs / (of.hours * 3_600_000));
  const stirred = Math.sqrt(1 - kept * kept);
  const waiting: { reportedMs: number; error: number }[] = [];
  let wander = random.normal();
  let typedIn = 0;
  return {
    estimate(truth: number, atMs: number): number {
      wander = kept * wander + stirred * random.normal();
      while (waiting[0] && waiting[0].reportedMs <= atMs) typedIn -= waiting.shift()!.error;
      return truth + of.wander * wander + of.noise * random.normal() + typedIn;
    },
    reported(result: LaboratoryResult, estimateThen: number, day: number): void {
      if (of.chasedFromDay !== undefined && day >= of.chasedFromDay)
        waiting.push({ reportedMs: result.reportedMs, error: estimateThen - result.value });
    },
  };
}
