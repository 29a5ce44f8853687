import { z } from 'zod';

const clock = z.string().regex(/^([01]\d|2[0-3]):[0-5]\d$/, 'A time looks like 06:00.');

/** A shift begins at a time of the site's clock and lasts until the next begins. */
export const shift = z.object({ name: z.string().trim().min(1).max(30), from: clock });
export type Shift = z.infer<typeof shift>;

/** How often a reference is asked for: `count` in each shift, day or week. */
export const samplingPlan = z.object({
  count: z.number().int().min(1, 'Ask for one sample at least.').max(24, 'Ask for 24 samples at most.'),
  per: z.enum(['shift', 'day', 'week']),
});
export type SamplingPlan = z.infer<typeof samplingPlan>;
