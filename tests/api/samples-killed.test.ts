import { expect, it } from 'vitest';
import { tryKilledCommits } from '../trials/killed-commits.ts';

/** Fifty kills of a larger file run apart, in `npm run trials`. */
it('a file that was being added when the server was killed is there wholly or not at all, and can be added again', async () => {
  const { agrees, figures } = await tryKilledCommits(20_261_201, { kills: 2, rows: 4000 });
  expect(agrees, JSON.stringify(figures)).toBe(true);
}, 60_000);
