import type { Random } from '../random.ts';

/** What goes wrong with an instrument, by days since the beginning. */
export type Fault =
  | { kind: 'rise'; fromDay: number; perDay: number; most: number }
  | { kind: 'step'; fromDay: number; by: number }
  | { kind: 'stuck'; fromDay: number };

/** A measured tag: an output or a drive of the unit, with the noise of its instrument. */
export interface Instrument {
  tag: string;
  description: string;
  unit: string;
  reads: string;
  noise: number;
  digits: number;
  fault?: Fault;
}

/** The readings of an instrument in turn: truth, noise, fault, rounded as it is recorded. */
export function readingsOf(
  { noise, digits, fault }: Instrument,
  random: Random,
): (truth: number, day: number) => number {
  const scale = 10 ** digits;
  let stuckAt: number | null = null;
  return (truth, day) => {
    const read = truth + noise * random.normal() + offsetOf(fault, day);
    const recorded = Math.round(read * scale) / scale;
    if (fault?.kind !== 'stuck' || day < fault.fromDay) return recorded;
    return (stuckAt ??= recorded);
  };
}

function offsetOf(fault: Fault | undefined, day: number): number {
  if (!fault || fault.kind === 'stuck' || day < fault.fromDay) return 0;
  return fault.kind === 'step' ? fault.by : Math.min(fault.most, (day - fault.fromDay) * fault.perDay);
}
