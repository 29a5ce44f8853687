import type { Random } from '../random.ts';

/** What a plant is driven by: a mean with a slow random walk about it, a daily swing, and levels that operators set. */
export interface Drive {
  mean: number;
  /** SD of the slow walk, and the hours over which it forgets itself. */
  slow?: number;
  hours?: number;
  /** Half the difference of day and night. */
  daily?: number;
  /** Levels, as differences from the mean, each kept for some days: grades, loads, kinds of feed. */
  levels?: { values: readonly number[]; days: number };
  /** Where it goes while the unit stands still; absent: as ever. */
  idle?: number;
}

const walkHours = 36;

/** The drive's value at each step in turn; `running` 1 while the unit runs, 0 while it stands still. */
export function sequenceOf(
  drive: Drive,
  stepMs: number,
  random: Random,
): (localMs: number, running: number) => number {
  const kept = Math.exp(-stepMs / ((drive.hours ?? walkHours) * 3_600_000));
  const stirred = Math.sqrt(1 - kept * kept);
  let walk = random.normal();
  let level = 0;
  let levelEndsMs = -Infinity;
  return (localMs, running) => {
    if (drive.slow) walk = kept * walk + stirred * random.normal();
    if (drive.levels && localMs >= levelEndsMs) {
      const { values, days } = drive.levels;
      level = values[Math.floor(random.uniform() * values.length)]!;
      levelEndsMs = localMs + days * 86_400_000 * (0.5 + random.uniform());
    }
    const day = Math.sin((2 * Math.PI * (localMs % 86_400_000)) / 86_400_000 - (2 / 3) * Math.PI);
    const value = drive.mean + (drive.slow ?? 0) * walk + (drive.daily ?? 0) * day + level;
    return drive.idle === undefined ? value : drive.idle + running * (value - drive.idle);
  };
}
