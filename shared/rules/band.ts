/** z of a two-sided 95 % band. */
export const bandFactor = 1.96;

/** Lower and upper edge of the 95 % band around an estimate, value ± 1.96 SD; all null where the SD is unknown. */
export function bandAround(value: readonly (number | null)[], sd: number | null) {
  const edge = (sign: number) =>
    value.map((at) => (at === null || sd === null ? null : at + sign * bandFactor * sd));
  return { low: edge(-1), high: edge(1) };
}
