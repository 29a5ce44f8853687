import { z } from 'zod';

/** A calendar date at a site; 31 February is refused. */
export const isoDate = z.iso.date({ message: 'Write a day that exists, such as 2026-11-29.' });

const longest = { days: 3650, months: 120 } as const;

/**
 * How often a duty falls due. `every` calendar months or days, counted from when it was last done, or anchored: due on
 * `anchorOn` and every interval after it, whenever it is done.
 */
export const interval = z
  .object({
    every: z
      .number('Write a number.')
      .int('Write a whole number.')
      .min(1, 'An interval must be at least 1; a duty that never falls due can’t be kept.'),
    unit: z.enum(['days', 'months']),
    counted: z.enum(['last-done', 'anchored']),
    anchorOn: isoDate.nullable(),
  })
  .superRefine(({ every, unit, counted, anchorOn }, context) => {
    const say = (path: string, message: string) =>
      context.addIssue({ code: 'custom', path: [path], message });
    if (every > longest[unit]) say('every', `Keep the interval within ${longest[unit]} ${unit}.`);
    if (counted === 'anchored' && anchorOn === null) say('anchorOn', 'Write the day that it counts from.');
  });
export type Interval = z.infer<typeof interval>;
