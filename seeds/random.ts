/** Seeded numbers, the same on every machine: uniform in [0, 1) and standard normal (Box & Muller 1958). */
export function randomFrom(seed: number) {
  let state = seed >>> 0;
  const uniform = (): number => {
    state = (state + 0x6d2b79f5) >>> 0;
    let t = Math.imul(state ^ (state >>> 15), 1 | state);
    t = (t + Math.imul(t ^ (t >>> 7), 61 | t)) ^ t;
    return ((t ^ (t >>> 14)) >>> 0) / 4_294_967_296;
  };
  const normal = (): number => Math.sqrt(-2 * Math.log(1 - uniform())) * Math.cos(2 * Math.PI * uniform());
  return { uniform, normal };
}
export type Random = ReturnType<typeof randomFrom>;

/** A stream of its own for each name (FNV-1a), so that one more or one fewer elsewhere changes no other numbers. */
export function streamOf(seed: number, name: string): Random {
  let hash = 0x811c9dc5 ^ seed;
  for (let i = 0; i < name.length; i++) hash = Math.imul(hash ^ name.charCodeAt(i), 0x01000193);
  return randomFrom(hash);
}
