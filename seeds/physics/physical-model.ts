/** Numbers by name: inputs or outputs of a model, in the units that the model states. */
export type Values<K extends string> = Readonly<Record<K, number>>;

/** A plant as ordinary differential equations: dx/dt = derivative(x, u), seen through outputs(x, u). Pure. */
export interface PhysicalModel<D extends string = string, Y extends string = string> {
  /** Longest step, in seconds, that integration may take. */
  longestStepS: number;
  /** States near the steady one; `settled` finds it. */
  guess: readonly number[];
  derivative(x: readonly number[], u: Values<D>): number[];
  outputs(x: readonly number[], u: Values<D>): Values<Y>;
}

type Derivative = (x: readonly number[]) => number[];

/** The states after `seconds` at constant inputs: classical Runge–Kutta of fourth order in equal steps. */
export function integrate(
  derivative: Derivative,
  x: readonly number[],
  seconds: number,
  longestStepS: number,
): number[] {
  const steps = Math.ceil(seconds / longestStepS);
  const h = seconds / steps;
  let state = [...x];
  for (let k = 0; k < steps; k++) state = rungeKutta(derivative, state, h);
  return state;
}

function rungeKutta(derivative: Derivative, x: number[], h: number): number[] {
  const k1 = derivative(x);
  const k2 = derivative(moved(x, k1, h / 2));
  const k3 = derivative(moved(x, k2, h / 2));
  const k4 = derivative(moved(x, k3, h));
  const next = new Array<number>(x.length);
  for (let i = 0; i < x.length; i++) next[i] = x[i]! + (h / 6) * (k1[i]! + 2 * k2[i]! + 2 * k3[i]! + k4[i]!);
  return next;
}

function moved(x: number[], slope: number[], by: number): number[] {
  const at = new Array<number>(x.length);
  for (let i = 0; i < x.length; i++) at[i] = x[i]! + by * slope[i]!;
  return at;
}

/** The steady state at constant inputs, by letting time pass. */
export function settled<D extends string>(model: PhysicalModel<D>, u: Values<D>, days = 10): number[] {
  return integrate((x) => model.derivative(x, u), model.guess, days * 86_400, model.longestStepS);
}

export const kelvin = (celsius: number): number => celsius + 273.15;

/** Speed of an Arrhenius reaction at `atC` against that at `referenceC`; `activation` J/mol. */
export const arrhenius = (atC: number, referenceC: number, activation: number): number =>
  Math.exp((activation / 8.314_462_618) * (1 / kelvin(referenceC) - 1 / kelvin(atC)));

/** Net radiation between two bodies, W; `area` is m² times emissivity and view factor. */
export const radiation = (fromC: number, toC: number, area: number): number =>
  5.670_374_419e-8 * area * (kelvin(fromC) ** 4 - kelvin(toC) ** 4);
