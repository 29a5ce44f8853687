import { Matrix } from 'ml-matrix';
import { attemptSeries, giveUp } from './attempt.ts';
import { holdInputs, integrateNoise } from './discretise.ts';
import { predict, readStart, update } from './kalman.ts';
import type { FilterStart, FilterStep, Gaussian, Updated } from './kalman.ts';
import { readMatrix, readNumber, readPositive, readSemidefinite, readSquare } from './linear-algebra.ts';
import type { Result } from './result.ts';
import type { Rows } from './state-space.ts';

/** A sensor: reading = row · x + v, var v = `variance`. */
export type Sensor = { row: number[]; variance: number };

/** One reading: `at` in seconds, of `sensor`, null where it is missing (the state is still reported there). */
export type SensorRecord = { at: number; sensor: string; value: number | null };

/** Inputs that hold from `at` (s) until the next entry; the first must not be later than the first record. */
export type HeldInputs = { at: number; u: number[] }[];

/**
 * Continuous model for readings at any times: dx/dt = A x + B u + w, `density` n×n the spectral density of w (G q Gᵀ).
 */
export type IrregularModel = { A: Rows; B?: Rows; density: Rows; sensors: Record<string, Sensor> };

/** State before and after each record, with the figures of its update, and the log-likelihood of all readings. */
export type RecordRun = { steps: FilterStep[]; logLikelihood: number; readings: number };

/**
 * Kalman filter over records at irregular times: the state is carried over each gap by the matrix exponential and Van
 * Loan's noise integral, across the changes of the inputs on the way; records at one instant follow each other without
 * prediction (their order does not matter). Different sensors may have different rates and variances. `start` holds at the
 * first record. Refuses `not-sorted` (records, inputs), `out-of-range` (a sensor that is not listed), `wrong-shape`,
 * `non-finite-input`, `singular` (a variance that is not above zero).
 */
export function filterRecords(
  model: IrregularModel,
  start: FilterStart,
  records: SensorRecord[],
  inputs: HeldInputs = [],
): Result<RecordRun> {
  return attemptSeries(() => {
    const read = readIrregular(model);
    const held = readInputs(inputs, read.B.columns, records);
    const run: RecordRun = { steps: [], logLikelihood: 0, readings: 0 };
    let state = readStart(start, read.A.rows);
    let before = -Infinity;
    readRecords(records, read.sensors).forEach(({ at, value, sensor }, i) => {
      let A = Matrix.eye(read.A.rows);
      if (i > 0) ({ state, A } = carry(read, held, state, before, at));
      before = at;
      const last = run.steps[run.steps.length - 1];
      if (last) last.A = A;
      const updated = value === null ? null : update(state, { ...sensor, y: Matrix.columnVector([value]) });
      run.steps.push({
        predicted: state,
        filtered: updated ?? state,
        update: updated,
        A: Matrix.eye(read.A.rows),
      });
      addUp(run, updated);
      state = updated ?? state;
    });
    return run;
  });
}

function addUp(run: RecordRun, updated: Updated | null): void {
  if (!updated) return;
  run.logLikelihood += updated.logLikelihood;
  run.readings += 1;
}

type ReadModel = ReturnType<typeof readIrregular>;

function readIrregular(model: IrregularModel) {
  const A = readSquare(model?.A, 'A');
  const n = A.rows;
  const B = model.B === undefined ? new Matrix(n, 0) : readMatrix(model.B, 'B', { rows: n });
  const density = readSemidefinite(model.density, 'density', n);
  const listed: unknown = model.sensors;
  if (typeof listed !== 'object' || listed === null) return giveUp('wrong-shape', { field: 'sensors' });
  const sensors = new Map<string, { C: Matrix; R: Matrix; offset: Matrix }>();
  for (const [name, sensor] of Object.entries(model.sensors)) {
    const C = readMatrix([sensor?.row], `sensors.${name}.row`, { columns: n });
    const variance = readNumber(sensor?.variance, `sensors.${name}.variance`);
    if (!(variance > 0)) return giveUp('singular', { field: `sensors.${name}.variance`, figure: variance });
    sensors.set(name, { C, R: new Matrix([[variance]]), offset: Matrix.zeros(1, 1) });
  }
  return { A, B, density, sensors, gaps: new Map<number, { Ad: Matrix; Bd: Matrix; Qd: Matrix }>() };
}

function readRecords(records: SensorRecord[], sensors: ReadModel['sensors']) {
  if (!Array.isArray(records)) return giveUp('wrong-shape', { field: 'records' });
  return records.map((record, i) => {
    const at = readNumber(record?.at, `records[${i}].at`);
    if (i > 0 && at < records[i - 1]!.at) return giveUp('not-sorted', { field: `records[${i}].at` });
    const sensor = sensors.get(record.sensor);
    if (!sensor) return giveUp('out-of-range', { field: `records[${i}].sensor` });
    return {
      at,
      sensor,
      value: record.value === null ? null : readNumber(record.value, `records[${i}].value`),
    };
  });
}

function readInputs(inputs: HeldInputs, p: number, records: SensorRecord[]): { at: number; u: Matrix }[] {
  if (!Array.isArray(inputs)) return giveUp('wrong-shape', { field: 'inputs' });
  if (p === 0) return [{ at: -Infinity, u: new Matrix(0, 1) }];
  if (inputs.length === 0) return giveUp('not-enough-data', { field: 'inputs', needed: 1, got: 0 });
  return inputs.map((entry, i) => {
    const at = readNumber(entry?.at, `inputs[${i}].at`);
    const sorted = i === 0 ? !(at > Number(records?.[0]?.at)) : at > inputs[i - 1]!.at;
    if (!sorted) return giveUp('not-sorted', { field: `inputs[${i}].at` });
    return { at, u: readMatrix([entry.u], `inputs[${i}].u`, { columns: p }).transpose() };
  });
}

/** Carries the state from one instant to the next, through every change of the inputs between. */
function carry(
  model: ReadModel,
  inputs: { at: number; u: Matrix }[],
  state: Gaussian,
  from: number,
  to: number,
) {
  let A = Matrix.eye(model.A.rows);
  let now = from;
  let place = inputs.findLastIndex((entry) => entry.at <= from);
  while (now < to) {
    const end = Math.min(inputs[place + 1]?.at ?? Infinity, to);
    if (end > now) {
      const { Ad, Bd, Qd } = gap(model, end - now);
      state = predict(state, { A: Ad, B: Bd, Q: Qd, u: inputs[place]!.u });
      A = Ad.mmul(A);
    }
    now = end;
    place++;
  }
  return { state, A };
}

/** Discrete matrices of a gap, kept for gaps of the same length. */
function gap(model: ReadModel, length: number) {
  let found = model.gaps.get(length);
  if (!found) {
    const { Bd } = holdInputs(model.A, model.B, readPositive(length, 'records'));
    found = { ...integrateNoise(model.A, model.density, length), Bd };
    if (model.gaps.size < 1000) model.gaps.set(length, found);
  }
  return found;
}
