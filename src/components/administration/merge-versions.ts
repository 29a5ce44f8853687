type Fields = Record<string, unknown>;
const same = (a: unknown, b: unknown): boolean => JSON.stringify(a) === JSON.stringify(b);

/**
 * Two people edited what both began from `base`. What only one of them changed needs no question; `both` are the fields
 * that they changed to different values, for which `merged` holds mine until somebody chooses.
 */
export function mergeVersions<F extends object>(base: F, mine: F, theirs: F): { merged: F; both: string[] } {
  const [b, m, t] = [base, mine, theirs] as Fields[] as [Fields, Fields, Fields];
  const names = Object.keys(m);
  const changedByMe = names.filter((name) => !same(b[name], m[name]));
  const both = changedByMe.filter((name) => !same(b[name], t[name]) && !same(m[name], t[name]));
  const kept = Object.fromEntries(changedByMe.map((name) => [name, m[name]]));
  return { merged: { ...t, ...kept } as F, both };
}

/** The merged fields after each disputed one was chosen. */
export function takeSides<F extends object>(
  merged: F,
  theirs: F,
  sides: Record<string, 'yours' | 'theirs'>,
): F {
  const taken = Object.keys(sides)
    .filter((name) => sides[name] === 'theirs')
    .map((name) => [name, (theirs as Fields)[name]]);
  return { ...merged, ...Object.fromEntries(taken) } as F;
}
