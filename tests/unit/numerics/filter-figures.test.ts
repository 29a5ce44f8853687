import { describe, expect, it } from 'vitest';
import { trials } from '../../trials/filter-figures.ts';

describe('simulated figures of the filters, small and seeded', () => {
  for (const trial of trials) {
    it(trial.name, () => {
      const { agrees, figures } = trial.run(1, 0.1);
      expect(agrees, JSON.stringify(figures)).toBe(true);
    });
  }
});
