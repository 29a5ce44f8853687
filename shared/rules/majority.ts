/**
 * What nine in ten at least agree on.
 * @returns null where no one thing has so many, or where there is nothing
 */
export function clearMajority<T>(counts: ReadonlyMap<T, number>): T | null {
  const all = [...counts.values()].reduce((sum, count) => sum + count, 0);
  for (const [one, count] of counts) if (count >= 0.9 * all) return one;
  return null;
}
