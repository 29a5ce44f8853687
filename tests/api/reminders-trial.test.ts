import { expect, it } from 'vitest';
import { tryReminders } from '../trials/reminders.ts';

/** The year with 500 soft sensors runs apart, in `npm run trials`. */
it('two months of reminders lose nothing, though workers are killed and the mail server refuses half', async () => {
  const trial = { sensors: 20, people: 15, days: 60, looksADay: 1, killing: 0.08, bustle: 8 };
  const { agrees, ...found } = await tryReminders(20_261_201, trial);
  expect(found).toMatchObject({ missing: [], extra: [] });
  expect(agrees, JSON.stringify(found.figures)).toBe(true);
  expect(found.figures.kills).toBeGreaterThan(0);
}, 240_000);
