import { attempt, giveUp } from './attempt.ts';
import { largestDimension, readNumber, readPositive } from './linear-algebra.ts';
import type { Result } from './result.ts';
import type { ContinuousModel, Quantity } from './state-space.ts';

/**
 * Lumps of heat capacity joined by conductances. `nodes` have a heat capacity (J/K) and become the states; `boundaries`
 * are temperatures that are known (inputs); `links` conduct between two of either (W/K); `heats` are heat flows that
 * are known (inputs, W) and enter a node by a `share` (default 1). All temperatures in one unit, °C or K.
 */
export type ThermalNetwork = {
  unit: '°C' | 'K';
  nodes: { name: string; heatCapacity: number }[];
  boundaries: { name: string }[];
  links: { between: [string, string]; conductance: number }[];
  heats: { name: string; into: string; share?: number }[];
  measured: string[];
  estimated: string[];
};

/**
 * Builds Cᵢ dTᵢ/dt = Σⱼ Gᵢⱼ (Tⱼ − Tᵢ) + Σ share · P (heat balance of each node) as dx/dt = A x + B u with
 * u = [boundary temperatures; heat flows]. Refuses `out-of-range` for a value that is not above zero or a name that is
 * unknown or used twice; the field says which, as "links[2].conductance".
 */
export function thermalNetwork(network: ThermalNetwork): Result<{ model: ContinuousModel }> {
  return attempt(() => {
    const { nodes, boundaries, links, heats } = readLists(network);
    const place = places([...nodes, ...boundaries].map((node) => node.name));
    const n = nodes.length;
    const capacity = nodes.map((node, i) => readPositive(node.heatCapacity, `nodes[${i}].heatCapacity`));
    const A = zeros(n, n);
    const B = zeros(n, boundaries.length + heats.length);
    links.forEach((link, i) => conduct(A, B, capacity, link, place, `links[${i}]`));
    heats.forEach((heat, i) => {
      const node = nodeOf(place, heat.into, n, `heats[${i}].into`);
      B[node]![boundaries.length + i]! += readNumber(heat.share ?? 1, `heats[${i}].share`) / capacity[node]!;
    });
    return { model: assemble(network, A, B, place) };
  });
}

function readLists(network: ThermalNetwork): ThermalNetwork {
  for (const field of ['nodes', 'boundaries', 'links', 'heats', 'measured', 'estimated'] as const) {
    const list: unknown = network?.[field];
    if (!Array.isArray(list) || list.some((item) => item === null || item === undefined)) {
      giveUp('wrong-shape', { field });
    }
  }
  const { nodes, boundaries, heats } = network;
  if (nodes.length === 0) giveUp('not-enough-data', { field: 'nodes', needed: 1, got: 0 });
  const size = nodes.length + boundaries.length + heats.length;
  if (size > largestDimension) giveUp('out-of-range', { field: 'nodes', figure: size });
  return network;
}

/** Number of each name: nodes first, then boundaries. */
function places(names: string[]): Map<string, number> {
  const place = new Map<string, number>();
  names.forEach((name, i) => {
    if (typeof name !== 'string' || place.has(name)) giveUp('out-of-range', { field: `nodes[${i}].name` });
    place.set(name, i);
  });
  return place;
}

function nodeOf(place: Map<string, number>, name: string, below: number, field: string): number {
  const index = place.get(name);
  return index === undefined || index >= below ? giveUp('out-of-range', { field }) : index;
}

function conduct(
  A: number[][],
  B: number[][],
  capacity: number[],
  link: ThermalNetwork['links'][number],
  place: Map<string, number>,
  field: string,
): void {
  const n = A.length;
  const G = readPositive(link.conductance, `${field}.conductance`);
  if (!Array.isArray(link.between)) giveUp('wrong-shape', { field: `${field}.between` });
  const a = nodeOf(place, link.between[0], Infinity, `${field}.between`);
  const b = nodeOf(place, link.between[1], Infinity, `${field}.between`);
  if (a === b) giveUp('out-of-range', { field: `${field}.between` });
  for (const [here, there] of [
    [a, b],
    [b, a],
  ] as const) {
    if (here >= n) continue;
    A[here]![here]! -= G / capacity[here]!;
    if (there < n) A[here]![there]! += G / capacity[here]!;
    else B[here]![there - n]! += G / capacity[here]!;
  }
}

function assemble(network: ThermalNetwork, A: number[][], B: number[][], place: Map<string, number>) {
  const { nodes, boundaries, heats, unit } = network;
  const n = nodes.length;
  const pick = (names: string[], field: string) =>
    names.map((name, i) => {
      const node = nodeOf(place, name, n, `${field}[${i}]`);
      return Array.from({ length: n }, (_, j) => (j === node ? 1 : 0));
    });
  const temperature = (name: string): Quantity => ({ name, unit });
  const p = boundaries.length + heats.length;
  if (network.measured.length === 0) giveUp('not-enough-data', { field: 'measured', needed: 1, got: 0 });
  if (network.estimated.length === 0) giveUp('not-enough-data', { field: 'estimated', needed: 1, got: 0 });
  const model: ContinuousModel = {
    domain: 'continuous',
    A,
    B,
    C: pick(network.measured, 'measured'),
    D: zeros(network.measured.length, p),
    H: pick(network.estimated, 'estimated'),
    F: zeros(network.estimated.length, p),
    states: nodes.map((node) => temperature(node.name)),
    inputs: [
      ...boundaries.map((boundary) => temperature(boundary.name)),
      ...heats.map((heat) => ({ name: heat.name, unit: 'W' })),
    ],
    outputs: network.measured.map(temperature),
    estimates: network.estimated.map(temperature),
  };
  return model;
}

function zeros(rows: number, columns: number): number[][] {
  return Array.from({ length: rows }, () => Array<number>(columns).fill(0));
}

/**
 * A plane wall: `thickness` m, `conductivity` W/(m·K), `density` kg/m³, `specificHeat` J/(kg·K), `area` m², cut into
 * `lumps` equal lumps; film coefficients in W/(m²·K) towards the boundary on either side (leave `film` out where the
 * surface itself has the boundary temperature, and `outside` out where the back is insulated).
 */
export type PlaneWall = {
  name: string;
  thickness: number;
  conductivity: number;
  density: number;
  specificHeat: number;
  area: number;
  lumps: number;
  inside: { boundary: string; film?: number };
  outside?: { boundary: string; film?: number };
};

/**
 * Nodes and links of a plane wall for {@link thermalNetwork}: node "name 1" is the innermost lump. Capacity ρ c A L/N,
 * conductance k A N/L between centres; half a lump and the film in series at each face.
 */
export function wallNodes(wall: PlaneWall): Result<Pick<ThermalNetwork, 'nodes' | 'links'>> {
  return attempt(() => {
    const N = wall?.lumps;
    if (!Number.isInteger(N) || N < 1 || N > largestDimension)
      giveUp('out-of-range', { field: 'lumps', figure: N });
    const slice = readPositive(wall.thickness, 'thickness') / N;
    const area = readPositive(wall.area, 'area');
    const k = readPositive(wall.conductivity, 'conductivity');
    const heatCapacity =
      readPositive(wall.density, 'density') * readPositive(wall.specificHeat, 'specificHeat') * slice * area;
    const lump = (i: number) => `${wall.name} ${i + 1}`;
    const face = (side: 'inside' | 'outside') => {
      const film = wall[side]?.film;
      const surface = film === undefined ? 0 : 1 / readPositive(film, `${side}.film`);
      return area / (surface + slice / 2 / k);
    };
    const links: ThermalNetwork['links'] = [
      { between: [wall.inside?.boundary, lump(0)], conductance: face('inside') },
    ];
    for (let i = 1; i < N; i++)
      links.push({ between: [lump(i - 1), lump(i)], conductance: (k * area) / slice });
    if (wall.outside)
      links.push({ between: [lump(N - 1), wall.outside.boundary], conductance: face('outside') });
    return { nodes: Array.from({ length: N }, (_, i) => ({ name: lump(i), heatCapacity })), links };
  });
}
