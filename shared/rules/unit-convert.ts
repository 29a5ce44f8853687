import Qty from 'js-quantities';
import { unitKey } from './sample-registry.ts';
import { unitAtoms } from './unit-atoms.ts';

/**
 * Why a value does not become one in another unit: of another kind, gauge beside absolute pressure, shares of different
 * things, a unit that is not known, or a value that can't be (below absolute zero).
 */
export type NoConversion = 'kind' | 'pressure' | 'share' | 'unknown' | 'impossible';
export type Conversion = { ok: true; value: number } | { ok: false; why: NoConversion };

interface Share {
  kind: 'share';
  /** Of mass, volume or substance; empty where the unit does not say. */
  of: string;
  factor: number;
}
interface Temperature {
  kind: 'temperature';
  /** As the units package spells the scale and its degree. */
  scale: string;
  degree: string;
}
interface Measure {
  kind: 'measure';
  factor: number;
  unit: string;
  /** Of a pressure: 'g' gauge, 'a' absolute, empty where the unit does not say. */
  against: '' | 'g' | 'a';
}
type Unit = Share | Temperature | Measure;

const temperatures: Record<string, Temperature> = {
  '°C': { kind: 'temperature', scale: 'tempC', degree: 'degC' },
  '°F': { kind: 'temperature', scale: 'tempF', degree: 'degF' },
  K: { kind: 'temperature', scale: 'tempK', degree: 'degK' },
  '°R': { kind: 'temperature', scale: 'tempR', degree: 'degR' },
};
const shares: Record<string, number> = {
  '%': 1e4,
  pct: 1e4,
  percent: 1e4,
  '‰': 1e3,
  ppm: 1,
  ppb: 1e-3,
};
const shareOf: Record<string, string> = {
  wt: 'mass',
  w: 'mass',
  m: 'mass',
  mass: 'mass',
  'm/m': 'mass',
  'w/w': 'mass',
  vol: 'volume',
  v: 'volume',
  'v/v': 'volume',
  mol: 'substance',
};
// Twelve digits keep every digit of a result, and none of the noise of the arithmetic.
const rounded = (value: number): number => Number(value.toPrecision(12));

function shareFrom(key: string): Share | null {
  const match =
    /^(wt|vol|mol|mass|[wvm])?[.-]?(%|‰|ppm|ppb|pct|percent)[.-]?\(?(wt|vol|mol|mass|[wvm](?:\/[wvm])?)?\)?$/i.exec(
      key,
    );
  if (!match) return null;
  const of = (match[1] ?? match[3] ?? '').toLowerCase();
  return { kind: 'share', of: shareOf[of] ?? of, factor: shares[match[2]!.toLowerCase()]! };
}

interface Product {
  factor: number;
  /** With exponents, as the units package reads them. */
  units: string[];
}

const raised = (unit: string, power: number): string[] | null => {
  if (power === 1) return [unit];
  const match = /^([a-z]+)(\d?)$/i.exec(unit);
  return match && [`${match[1]}^${Number(match[2] || 1) * power}`];
};

/** "kg", "mm2", "Pa·s", "s-1", or "1" for nothing, raised to a sign: 1 above the stroke, −1 below it. */
function productOf(part: string, sign: 1 | -1): Product | null {
  if (part === '1') return { factor: 1, units: [] };
  const all: Product = { factor: 1, units: [] };
  for (const token of part.split(/[·*.⋅]/)) {
    const bare = Object.hasOwn(unitAtoms, token) ? token : token.replace(/\^?-?[1-4]$/, '');
    const atom = Object.hasOwn(unitAtoms, bare) ? unitAtoms[bare]! : null;
    const power = sign * (bare === token ? 1 : Number(/-?\d$/.exec(token)![0]));
    const units = atom && raised(atom[1], power);
    if (!units) return null;
    all.factor *= atom[0] ** power;
    all.units.push(...units);
  }
  return all;
}

function measureFrom(key: string): Measure | null {
  const pressure = /^(k?Pa|MPa|hPa|m?bar|psi|atm)[-.]?\(?(g|a|abs|gauge)\)?$/.exec(key);
  const parts = (pressure?.[1] ?? key).split('/');
  if (parts.length > 3) return null;
  const products = parts.map((part, index) => productOf(part, index === 0 ? 1 : -1));
  if (products.some((one) => one === null)) return null;
  const factor = products.reduce((whole, one) => whole * one!.factor, 1);
  const unit = products.flatMap((one) => one!.units).join(' ');
  const against = pressure ? (pressure[2]!.startsWith('g') ? 'g' : 'a') : '';
  return unit === '' ? null : { kind: 'measure', factor, unit, against };
}

const mostKnown = 1000;
const known = new Map<string, Unit | null>();

function unitFrom(text: string): Unit | null {
  const key = unitKey(text);
  let unit = known.get(key);
  if (unit === undefined) {
    unit =
      (Object.hasOwn(temperatures, key) ? temperatures[key] : null) ?? shareFrom(key) ?? measureFrom(key);
    if (known.size < mostKnown) known.set(key, unit);
  }
  return unit;
}

/** Is the text the spelling of a unit that values could be converted from? */
export const isKnownUnit = (text: string): boolean => unitFrom(text) !== null;

const no = (why: NoConversion): Conversion => ({ ok: false, why });

/** A conversion of values or of differences: a straight line, that the units package is asked for once. */
interface Line {
  factor: number;
  offset: number;
  /** Absolute zero, of temperatures. */
  lowest: number;
}
type Found = Line | NoConversion;

function temperatureLine(a: Temperature, b: Temperature): Line {
  const factor = Qty(1, a.degree).to(b.degree).scalar;
  const lowest = Qty(0, 'tempK').to(a.scale).scalar;
  return { factor, offset: Qty(0, a.scale).to(b.scale).scalar, lowest };
}

function findLine(from: string, to: string): Found {
  const [a, b] = [unitFrom(from), unitFrom(to)];
  if (!a || !b) return 'unknown';
  if (a.kind === 'temperature' && b.kind === 'temperature') return temperatureLine(a, b);
  const straight = { offset: 0, lowest: -Infinity };
  if (a.kind === 'share' && b.kind === 'share')
    return a.of === b.of ? { factor: a.factor / b.factor, ...straight } : 'share';
  if (a.kind !== 'measure' || b.kind !== 'measure') return 'kind';
  const unit = Qty(1, a.unit);
  if (!unit.isCompatible(Qty(1, b.unit))) return 'kind';
  if (a.against !== b.against) return 'pressure';
  return { factor: (a.factor / b.factor) * unit.to(b.unit).scalar, ...straight };
}

const lines = new Map<string, Found>();

function lineBetween(from: string, to: string): Found {
  const key = `${from}\n${to}`;
  let line = lines.get(key);
  if (line === undefined) {
    line = findLine(from, to);
    if (lines.size < mostKnown) lines.set(key, line);
  }
  return line;
}

function along(line: Found, value: number, offset: 'offset' | null): Conversion {
  if (typeof line === 'string') return no(line);
  if (offset && value < line.lowest) return no('impossible');
  const plain = value * line.factor;
  // Where an offset all but cancels the value, only fixed decimals are free of noise.
  const converted = offset && line.offset !== 0 ? Number((plain + line.offset).toFixed(9)) : plain;
  return Number.isFinite(converted) ? { ok: true, value: rounded(converted) } : no('impossible');
}

/**
 * Converts a value between stated units by a units package, with exact factors. Shares of mass, volume and substance
 * never become one another, nor gauge and absolute pressure, nor standard volumes and actual ones.
 * @param value in `from`
 * @param from and `to`: spellings as people write them ("° C", "mg/m3", "wt%", "bar(g)")
 * @returns the value in `to`, or why there is none: `kind`, `pressure`, `share`, `unknown`,
 * `impossible`
 * Source: NIST SP 811 (2008), appendix B; ppm to % by definition.
 */
export const convertValue = (value: number, from: string, to: string): Conversion =>
  along(lineBetween(from, to), value, 'offset');

/**
 * Converts a difference, such as r, R or a standard deviation: temperatures without the offset of their scales.
 * @returns as {@link convertValue}
 */
export const convertDifference = (value: number, from: string, to: string): Conversion =>
  along(lineBetween(from, to), value, null);

const families: readonly string[][] = [
  ['°C', '°F', 'K'],
  ['%', '‰', 'ppm', 'ppb'],
  ['mg/m3', 'μg/m3', 'g/m3', 'mg/l', 'μg/l', 'g/l'],
  ['bar', 'mbar', 'kPa', 'MPa', 'psi'],
];
const likely = new Map<string, string[]>();

/** Units that a value could be in where somebody left out or mistook the unit: of the same family, `unit` itself left out. */
export function likelyUnits(unit: string): string[] {
  let units = likely.get(unit);
  if (!units) {
    const family = families.find((all) => all.some((other) => convertValue(1, other, unit).ok)) ?? [];
    units = family.filter((other) => unitKey(other) !== unitKey(unit));
    if (likely.size < mostKnown) likely.set(unit, units);
  }
  return units;
}
