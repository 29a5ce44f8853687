/** A seeded source of numbers: `uniform` in [0, 1), `normal` with mean 0 and SD 1. */
export type SeededRandom = { uniform: () => number; normal: () => number };

/** Mulberry32 with Box-Muller: enough for trials of some millions of numbers, the same on every machine. */
export function seededRandom(seed: number): SeededRandom {
  let state = seed | 0;
  const uniform = () => {
    state = (state + 0x6d2b79f5) | 0;
    let mixed = Math.imul(state ^ (state >>> 15), 1 | state);
    mixed = (mixed + Math.imul(mixed ^ (mixed >>> 7), 61 | mixed)) ^ mixed;
    return ((mixed ^ (mixed >>> 14)) >>> 0) / 4294967296;
  };
  let spare: number | null = null;
  const normal = () => {
    if (spare !== null) {
      const kept = spare;
      spare = null;
      return kept;
    }
    const radius = Math.sqrt(-2 * Math.log(1 - uniform()));
    const angle = 2 * Math.PI * uniform();
    spare = radius * Math.sin(angle);
    return radius * Math.cos(angle);
  };
  return { uniform, normal };
}

/** `n` values of a first-order autoregression with mean 0, overall SD 1 and lag-1 autocorrelation `phi`. */
export function autoregression(random: SeededRandom, n: number, phi: number): Float64Array {
  const values = new Float64Array(n);
  const fresh = Math.sqrt(1 - phi * phi);
  let last = random.normal();
  for (let i = 0; i < n; i++) {
    values[i] = last;
    last = phi * last + fresh * random.normal();
  }
  return values;
}
