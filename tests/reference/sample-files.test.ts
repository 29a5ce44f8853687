import { describe, expect, it } from 'vitest';
import { tableOf } from '../../shared/rules/sample-file.ts';
import { criticalRange } from '../../shared/rules/sample-replicates.ts';
import { convertDifference, convertValue } from '../../shared/rules/unit-convert.ts';
import { readSamples, textFile } from '../support/read-samples.ts';
import { seededRandom } from '../trials/seeded-random.ts';
import csv from './values/csv-rfc4180.json';
import units from './values/units.json';

// Source: RFC 4180 (2005), section 2; rows parsed by Python's csv module in strict mode.
describe('delimited text', () => {
  it.each(csv.expected.rfc)('$name', ({ text, rows }) => {
    const table = tableOf(textFile(text), { sheet: null, delimiter: ',' });
    // Line breaks within a field come as one character, and rows of blanks are passed over, both on purpose.
    const expected = rows
      .map((cells) => cells.map((cell) => cell.replaceAll('\r\n', '\n')))
      .filter((cells) => cells.some((cell) => cell !== ''));
    expect(table.ok && table.rows.map(({ cells }) => cells)).toEqual(expected);
  });

  it('names the line of a ragged row, and keeps two columns of one name apart', async () => {
    const { at, proposed } = await readSamples(
      'no,taken,value,value\n1,2026-11-28 06:10,7.5\n2,2026-11-28 06:20,7.5,8\n',
    );
    expect(at(2).words).toContain('3 cells where the header has 4');
    expect(proposed.columns.value).toBe(2);
  });
});

describe('units', () => {
  const { expected, tolerance } = units;
  const inUnits: [string, string, number][] = [
    ['in', 'm', expected.inch_m],
    ['ft', 'm', expected.foot_m],
    ['lb', 'kg', expected.lb_kg],
    ['lbf', 'N', expected.lbf_N],
    ['psi', 'Pa', expected.psi_Pa],
    ['bar', 'Pa', expected.bar_Pa],
    ['atm', 'Pa', expected.atm_Pa],
    ['torr', 'Pa', expected.torr_Pa],
    ['kgf/cm²', 'Pa', expected.kgf_cm2_Pa],
    ['Btu', 'J', expected.Btu_IT_J],
    ['cal', 'J', expected.cal_IT_J],
    ['hp', 'W', expected.hp_W],
    ['gal', 'm³', expected.US_gal_m3],
    ['bbl', 'm³', expected.bbl_m3],
    ['mmHg', 'Pa', expected.mmHg_Pa],
    ['inH2O', 'Pa', expected.inH2O_4C_Pa],
  ];

  // Source: NIST SP 811 (2008), appendix B; mmHg and inH2O by convention.
  it.each(inUnits)('1 %s in %s is %d', (from, to, value) => {
    const converted = convertValue(1, from, to);
    expect(converted.ok && Math.abs(converted.value / value - 1)).toBeLessThan(tolerance.rel);
    const back = convertValue(value, to, from);
    expect(back.ok && Math.abs(back.value - 1)).toBeLessThan(tolerance.rel);
  });

  // Source: °F = °C × 9/5 + 32 and °R = K × 9/5, by definition.
  it.each([-40, 0, 37.5, 1470])(
    '%d °C is 9/5 of it and 32 more in °F, and a difference 9/5 of it',
    (celsius) => {
      const value = convertValue(celsius, '°C', '°F');
      expect(value.ok && value.value).toBeCloseTo((celsius * 9) / 5 + 32, 9);
      const difference = convertDifference(celsius, '°C', '°F');
      expect(difference.ok && difference.value).toBeCloseTo(celsius * expected.delta_degF_per_delta_degC, 9);
      const kelvin = convertValue(celsius + 300, 'K', '°R');
      expect(kelvin.ok && kelvin.value).toBeCloseTo(((celsius + 300) * 9) / 5, 9);
    },
  );

  it('gauge and absolute pressure are no conversion of each other, and nothing lies below absolute zero', () => {
    expect(convertValue(1, 'bar(g)', 'bar(a)')).toEqual({ ok: false, why: 'pressure' });
    expect(convertValue(1, 'psig', 'bar')).toEqual({ ok: false, why: 'pressure' });
    expect(convertValue(-300, '°C', 'K')).toEqual({ ok: false, why: 'impossible' });
    expect(convertDifference(-300, '°C', 'K')).toEqual({ ok: true, value: -300 });
  });

  it('ppm is 0.0001 %, and shares of mass, volume and substance stay apart', () => {
    expect(convertValue(1, 'ppm', '%')).toEqual({ ok: true, value: 0.0001 });
    for (const [a, b] of [
      ['wt%', 'vol%'],
      ['wt%', '%'],
      ['ppmv', 'ppm'],
      ['mol%', 'vol%'],
    ] as const)
      expect(convertValue(1, a, b)).toEqual({ ok: false, why: 'share' });
  });
});

// Source: ISO 5725-6, factors of the critical range (from memory): what range of n results of a normal distribution is
// exceeded by one in twenty. The printed factors have two digits, so the share may lie between 4 and 6 %.
describe('the critical range', () => {
  it.each([2, 3, 4])('of %d results is exceeded by one in twenty', (count) => {
    const random = seededRandom(811 + count);
    const limit = criticalRange(count, 2.8)!;
    const trials = 100_000;
    let beyond = 0;
    for (let trial = 0; trial < trials; trial++) {
      const values = Array.from({ length: count }, () => random.normal());
      if (Math.max(...values) - Math.min(...values) > limit) beyond += 1;
    }
    expect(beyond / trials).toBeGreaterThan(0.04);
    expect(beyond / trials).toBeLessThan(0.06);
  });
});
