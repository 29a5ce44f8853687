import { describe, it } from 'vitest';
import {
  chiSquareCdf,
  chiSquareQuantile,
  chiSquareUpperP,
  fQuantile,
  normalQuantile,
  tCdf,
  tQuantile,
} from '../../shared/numerics/distributions.ts';
import { nisBounds, nisGate } from '../../shared/numerics/whiteness.ts';
import { answered, expectRelative } from './expectations.ts';
import tables from './values/critical-values.json';
import nis from './values/nis-bounds.json';

const rel = tables.tolerance.rel;
const pairOf = (key: string) => key.split(',').map(Number) as [number, number];

// Source: any statistical tables; computed with scipy 1.10.1.
describe('quantiles agree with tables', () => {
  it('Student t', () => {
    for (const [df, t] of Object.entries(tables.expected.t_0975))
      expectRelative(tQuantile(0.975, Number(df)), t, rel);
    for (const [df, t] of Object.entries(tables.expected.t_095))
      expectRelative(tQuantile(0.95, Number(df)), t, rel);
  });
  it('F', () => {
    for (const [key, f] of Object.entries(tables.expected.F_095))
      expectRelative(fQuantile(0.95, ...pairOf(key)), f, rel);
  });
  it('χ²', () => {
    for (const [key, x] of Object.entries(tables.expected.chi2))
      expectRelative(chiSquareQuantile(...pairOf(key)), x, rel);
  });
  it('normal', () => {
    for (const [p, z] of Object.entries(tables.expected.z)) expectRelative(normalQuantile(Number(p)), z, rel);
  });
  it('Student t at the broken degrees of freedom that an effective n gives (values from scipy 1.10.1)', () => {
    expectRelative(tQuantile(0.975, 2.5), 3.5746548420036817, rel);
    expectRelative(tCdf(-3, 0.5), 0.1836540779929717, rel);
  });
});

// Source: scipy 1.17.1. The χ² package is wrong above some 2,000 degrees of freedom; ours takes over at 1,000.
it('χ² at many degrees of freedom', () => {
  expectRelative(chiSquareCdf(2400, 2391), 0.555521026471251, 1e-12);
  expectRelative(chiSquareUpperP(10500, 10000), 0.00024794736798936033, 1e-11);
  expectRelative(chiSquareQuantile(0.975, 20000), 20393.883649999767, 1e-13);
});

// Source: Bar-Shalom, Li & Kirubarajan (2001), sec. 5.4; computed with scipy 1.10.1, book figures from memory.
describe('bounds of the normalised innovation squared', () => {
  it.each(nis.expected.bounds)('dimension $dim, mean of $N', ({ dim, N, avg_lo, avg_hi }) => {
    const { low, high } = answered(nisBounds(dim, N));
    expectRelative(low, avg_lo, nis.tolerance.rel);
    expectRelative(high, avg_hi, nis.tolerance.rel);
  });
  it.each(nis.expected.gates)('gate for dimension $dim at $p', ({ dim, p, gate }) => {
    expectRelative(answered(nisGate(dim, p)).gate, gate, nis.tolerance.rel);
  });
});
