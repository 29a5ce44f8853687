import type { Random } from '../random.ts';

/** r and R are 95 % limits for the difference of two results: 2.77 of their SDs (ISO 5725). */
const limitPerSd = 2.77;
const quarterMs = 900_000;

export interface Method {
  name: string;
  repeatability: number;
  reproducibility: number;
  /** Below it the laboratory says only "less than". */
  detectionLimit?: number;
}

/** When a soft sensor's references are taken, and by what method. */
export interface Sampling {
  point: string;
  method: Method;
  everyHours: number;
  /** Local hour of the first one each day (standard time). */
  firstHour: number;
  reportedAfterHours: number;
  digits: number;
  /** From this day on nobody takes samples. */
  silentFromDay?: number;
  /** From this day on another procedure gives results that differ by this much. */
  change?: { fromDay: number; by: number };
}

export interface LaboratoryResult {
  takenMs: number;
  reportedMs: number;
  value: number;
  qualifier: '<' | null;
  asWritten: string;
}

/** Local instants of samples in turn: by the clock, up to three quarters of an hour late, one in twenty left out. */
export function samplingTimes(sampling: Sampling, fromMs: number, random: Random): () => number {
  const every = sampling.everyHours * 3_600_000;
  let nominal = Math.floor(fromMs / 86_400_000) * 86_400_000 + sampling.firstHour * 3_600_000 - every;
  return () => {
    do nominal += every;
    while (nominal < fromMs || random.uniform() < 0.05);
    return nominal + quarterMs * Math.floor(4 * random.uniform());
  };
}

/** What the laboratory says: the truth with the scatter between runs and within one, as r and R have it. */
export function resultOf(
  sampling: Sampling,
  truth: number,
  takenMs: number,
  day: number,
  random: Random,
): LaboratoryResult {
  const { repeatability, reproducibility, detectionLimit } = sampling.method;
  const between = Math.sqrt(reproducibility ** 2 - repeatability ** 2) / limitPerSd;
  const changed = sampling.change && day >= sampling.change.fromDay ? sampling.change.by : 0;
  const found = truth + changed + between * random.normal() + (repeatability / limitPerSd) * random.normal();
  const late = 0.75 + 0.5 * random.uniform();
  const reportedMs = takenMs + Math.round(sampling.reportedAfterHours * late * 60) * 60_000;
  const asWritten = found.toFixed(sampling.digits);
  if (detectionLimit !== undefined && found < detectionLimit) {
    return { takenMs, reportedMs, value: detectionLimit, qualifier: '<', asWritten: `<${detectionLimit}` };
  }
  return { takenMs, reportedMs, value: Number(asWritten), qualifier: null, asWritten };
}
