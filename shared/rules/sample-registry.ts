/** A soft sensor that takes samples. */
export interface SampleSensor {
  tagName: string;
  unit: string;
  methodId: number | null;
}

/** What a site knows that bears on a file of samples: its points in use, and the soft sensors that samples go to. */
export interface SampleRegistry {
  zone: string;
  /** By name in lower case. */
  pointsByName: ReadonlyMap<string, { id: number; name: string }>;
  sensorsAt: ReadonlyMap<number, readonly SampleSensor[]>;
}

/**
 * One spelling of a unit, to compare by: "° C", "degC" and "℃" are °C, "mg/m3" is mg/m³; upper and lower case differ
 * (mPa is not MPa). Nothing is converted.
 */
export function unitKey(unit: string): string {
  const bare = unit.replaceAll('º', '°').normalize('NFKC').replace(/\s+/g, '').replaceAll('−', '-');
  return bare.replace(/^deg\.?([CFK])$/i, (_whole, letter: string) => `°${letter.toUpperCase()}`);
}

/**
 * The units that samples of a point may have: that of the method where one is chosen, else those of the soft sensors
 * there. An empty list: nothing is known, any unit is taken.
 */
export function expectedUnits(
  registry: SampleRegistry,
  samplePointId: number,
  methodUnit: string | null,
): string[] {
  if (methodUnit !== null) return [methodUnit];
  return [...new Set((registry.sensorsAt.get(samplePointId) ?? []).map(({ unit }) => unit))];
}
