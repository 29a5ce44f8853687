import { z } from 'zod';

/** Query of a paged list. */
export const pageQuery = {
  page: z.coerce.number().int().min(1).max(100_000).default(1),
  perPage: z.coerce.number().int().min(1).max(200).default(50),
};

/** A page of rows with the number of all that match. */
export const paged = <T extends z.ZodType>(row: T) =>
  z.object({ rows: z.array(row), total: z.number().int() });
