import type { Interval } from '../../shared/contracts/interval.ts';
import type { SheetFields } from '../../shared/contracts/register.ts';
import type { DemoSite, PersonKey } from '../company.ts';
import type { PhysicalModel } from '../physics/physical-model.ts';
import type { Drive } from './drive.ts';
import type { Instrument } from './instrument.ts';
import type { ControlSystem } from './control-system.ts';
import type { Sampling } from './laboratory.ts';

/** Days are counted from the first day of the simulation, instants of stops in days too. */
export interface Stop {
  fromDay: number;
  /** Absent: it stands still to this day. */
  toDay?: number;
}

/** A demo soft sensor. Its truth is an output of the unit's model, so its true error is known. */
export interface DemoSensor {
  truth: string;
  /** Tags of a regression, or how the control system computes an external estimate. */
  estimate: { inputs: readonly string[] } | { external: ControlSystem };
  sampling: Sampling;
  life: 'in-service' | 'suspended' | 'waiting' | 'draft';
  owner: PersonKey;
  deputy: PersonKey;
  approver: PersonKey;
  /** How often it falls due; absent: as is usual for its importance class. */
  recalibration?: Interval;
  /** Day of the yearly review, which is then anchored there; absent: a year after the last one. */
  reviewOnDay?: number;
  /** Limit of the spread; absent: by what the fit left over. */
  allowedSpread?: number;
  sheet: Pick<
    SheetFields,
    | 'tagName'
    | 'name'
    | 'quantity'
    | 'unit'
    | 'decimals'
    | 'importanceClass'
    | 'consumers'
    | 'purpose'
    | 'allowedErrorAbsolute'
    | 'transportDelayMs'
    | 'promisedReferenceMs'
    | 'fallback'
    | 'limitations'
  >;
}

/** A unit of plant: the physics, what drives it, what is measured on it, and the soft sensors there. */
export interface DemoUnit {
  site: DemoSite;
  area: string;
  name: string;
  model: PhysicalModel;
  drives: Readonly<Record<string, Drive>>;
  instruments: readonly Instrument[];
  sensors: readonly DemoSensor[];
  stops?: readonly Stop[];
  /** Readings every minute from this day on; every quarter of an hour before, and everywhere else. */
  everyMinuteFromDay?: number;
}
