import { expect, it } from 'vitest';
import { trials } from '../../trials/numerics-figures.ts';

/** The full trials run apart; here each is small, with room for what chance does to it. */
it.each(trials)(
  '$name',
  ({ run }) => {
    const { figures, agrees } = run(20_260, 0.04);
    expect(agrees, JSON.stringify(figures)).toBe(true);
  },
  60_000,
);
