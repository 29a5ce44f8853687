/** A soft sensor that takes samples. */
export interface SampleSensor {
  tagName: string;
  unit: string;
  methodId: number | null;
}

/** What a site knows that bears on a file of samples: its points in use, and the soft sensors that samples go to. */
export interface SampleRegistry {
  zone: string;
  /** By name and by each other name, in lower case. */
  pointsByName: ReadonlyMap<string, { id: number; name: string }>;
  sensorsAt: ReadonlyMap<number, readonly SampleSensor[]>;
}

/**
 * One spelling of a unit, to compare by: "° C", "degC" and "℃" are °C, "mg/m3" is mg/m³; upper and lower case differ
 * (mPa is not MPa). A bare C, F or K is a temperature, as no result is in coulombs or farads. Nothing is converted.
 */
export function unitKey(unit: string): string {
  const bare = unit.replaceAll('º', '°').normalize('NFKC').replace(/\s+/g, '').replaceAll('−', '-');
  const scale =
    /^(?:deg\.?|°)?(C|F|K|R)$/i.exec(bare)?.[1] ??
    /^(c)elsius$|^(f)ahrenheit$|^(k)elvin$/i.exec(bare)?.[0]?.[0];
  if (!scale || bare === 'R' || /^[cfkr]$/.test(bare)) return bare;
  return scale.toUpperCase() === 'K' ? 'K' : `°${scale.toUpperCase()}`;
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
