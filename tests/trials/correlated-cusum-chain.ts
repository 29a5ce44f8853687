import { normalCdf, normalDensity } from '../../shared/numerics/distributions.ts';

/** Half range of the error in its chain, SDs, and the widest cell, SDs. */
const reach = 4.8;
const widestCell = 0.17;
const mostSteps = 20_000;

/**
 * Average run length of the upper sum of a CUSUM whose errors follow a first-order autoregression of unit overall SD and
 * lag-1 autocorrelation `phi` in [0, 0.95]; `drift` = k − shift and `h` in those SDs. The sum starts at zero while the
 * errors are already running. Markov chain over cells of sum and error; once the probability left decays at a steady
 * rate the rest is summed as a geometric series. Within 1 % of simulation (tests/trials). Infinity where the rate is
 * too small to be told from 1.
 */
export function correlatedCusumLength(drift: number, h: number, phi: number): number {
  const cell = cellWidth(drift, h);
  const fall = Math.round(drift / cell);
  // The last cell below h may be cut: its run length lies between those of the whole numbers of cells around it.
  const cells = h / cell - 0.5;
  const below = Math.floor(cells);
  const low = chainLength(cell, fall, below, phi);
  if (cells === below) return low;
  const high = chainLength(cell, fall, below + 1, phi);
  return Math.exp(Math.log(low) + (cells - below) * (Math.log(high) - Math.log(low)));
}

/** Cell of which the drift is a whole multiple, no wider than a sixteenth of h. */
function cellWidth(drift: number, h: number): number {
  const widest = Math.min(widestCell, h / 16);
  const size = Math.abs(drift);
  return size < widest / 16 ? widest : size / Math.ceil(size / widest);
}

function chainLength(cell: number, fall: number, top: number, phi: number): number {
  const half = Math.ceil(reach / cell);
  const errors = 2 * half + 1;
  const moves = transitionRows(cell, half, phi);
  let mass = startMass(cell, half, top);
  let left = 1;
  let total = 0;
  let rate = 0;
  for (let step = 1; step <= mostSteps; step++) {
    total += left;
    mass = stepMass(mass, moves, errors, half, fall, top);
    let next = 0;
    for (let i = 0; i < mass.length; i++) next += mass[i]!;
    const nextRate = next / left;
    left = next;
    if (left < 1e-10) return total;
    if (step > 20 && Math.abs(nextRate - rate) < 1e-11 * (1 - nextRate) + 1e-15) {
      return nextRate < 1 ? total + left / (1 - nextRate) : Infinity;
    }
    rate = nextRate;
  }
  return total + left / (1 - rate);
}

/** P(next error cell | error cell), by rows; the SD is less by what the cells themselves add (Sheppard). */
function transitionRows(cell: number, half: number, phi: number): Float64Array {
  const errors = 2 * half + 1;
  const sd = Math.sqrt(1 - phi * phi - (cell * cell) / 12);
  const rows = new Float64Array(errors * errors);
  for (let i = 0; i < errors; i++) {
    const mean = phi * (i - half) * cell;
    for (let j = 0; j < errors; j++) {
      const middle = (j - half) * cell - mean;
      const upper = j === errors - 1 ? Infinity : (middle + cell / 2) / sd;
      const lower = j === 0 ? -Infinity : (middle - cell / 2) / sd;
      rows[i * errors + j] =
        lower > 0 ? normalCdf(-lower) - normalCdf(-upper) : normalCdf(upper) - normalCdf(lower);
    }
  }
  return rows;
}

/** All of the sum at zero, the error distributed as it runs. */
function startMass(cell: number, half: number, top: number): Float64Array {
  const errors = 2 * half + 1;
  const mass = new Float64Array((top + 1) * errors);
  let whole = 0;
  for (let j = 0; j < errors; j++) whole += mass[j] = normalDensity((j - half) * cell);
  for (let j = 0; j < errors; j++) mass[j]! /= whole;
  return mass;
}

function stepMass(
  mass: Float64Array,
  moves: Float64Array,
  errors: number,
  half: number,
  fall: number,
  top: number,
): Float64Array {
  const next = new Float64Array(mass.length);
  const row = new Float64Array(errors);
  for (let sum = 0; sum <= top; sum++) {
    row.fill(0);
    for (let i = 0; i < errors; i++) {
      const share = mass[sum * errors + i]!;
      if (share < 1e-18) continue;
      for (let j = 0; j < errors; j++) row[j]! += share * moves[i * errors + j]!;
    }
    for (let j = 0; j < errors; j++) {
      const to = Math.max(0, sum + j - half - fall);
      if (to <= top) next[to * errors + j]! += row[j]!;
    }
  }
  return next;
}
