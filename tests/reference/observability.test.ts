import { describe, expect, it } from 'vitest';
import { observabilityGramian } from '../../shared/numerics/observability-gramian.ts';
import { hautusRank, observability, observabilityMatrix } from '../../shared/numerics/observability.ts';
import { conditionNumber, readMatrix } from '../../shared/numerics/linear-algebra.ts';
import { answered, expectAllRelative, expectRelative } from './expectations.ts';
import item from './values/observability-rank.json';
import steady from './values/steady-filter.json';

const complex = (e: number | { re: number; im: number }) => (typeof e === 'number' ? { re: e, im: 0 } : e);

// Source: Kalman rank test and Popov–Belevitch–Hautus test; the first two systems after Ogata ch. 9 (attribution from
// memory). Ranks by exact rational arithmetic (sympy), condition numbers with numpy 1.24.2, ranks confirmed in Octave.
describe('observability and detectability', () => {
  for (const system of item.expected.cases) {
    const { name, A, C } = system;
    it(name, () => {
      const report = answered(observability({ A, C, domain: 'continuous' }));
      expect(report.rank).toBe(system.rank);
      expect(report.observable).toBe(system.observable);
      expect(report.detectable).toBe(system.detectable_continuous);
      const hidden = report.modes.filter((mode) => !mode.observable).map((mode) => mode.eigenvalue.re);
      expect(hidden.length).toBe(system.unobservable_eigs.length);
      expectAllRelative(
        hidden,
        system.unobservable_eigs.map((e) => complex(e).re),
        1e-9,
      );
      for (const { eig, rank } of system.pbh)
        expect(answered(hautusRank(A, C, complex(eig))).rank).toBe(rank);
    });

    it(`${name}: observability matrix`, () => {
      const { matrix } = answered(observabilityMatrix(A, C));
      expectAllRelative(matrix.flat(), system.observability_matrix.flat(), 1e-12);
      const condition = conditionNumber(readMatrix(matrix, 'O'), 'O');
      if (system.cond === 'inf') expect(condition).toBe(Infinity);
      else expectRelative(condition, Number(system.cond), item.tolerance.cond_rel);
    });
  }

  // Computed with SciPy 1.10.1 solve_discrete_lyapunov.
  it('observability Gramian of four lumps', () => {
    const { W } = answered(observabilityGramian(steady.inputs.A, steady.inputs.C));
    expectAllRelative(W.flat(), steady.expected.gramian.flat(), steady.tolerance.rel);
    const { W: long } = answered(observabilityGramian(steady.inputs.A, steady.inputs.C, 4000));
    expectAllRelative(long.flat(), W.flat(), 1e-9);
  });
});
