import { bigint, customType, integer, timestamp } from 'drizzle-orm/pg-core';

/** An instant; milliseconds, because a JavaScript date holds no more and must match its own row. */
export const instant = (name: string) => timestamp(name, { precision: 3, withTimezone: true, mode: 'date' });

export const identity = (name = 'id') => integer(name).primaryKey().generatedAlwaysAsIdentity();

export const bigIdentity = (name = 'id') =>
  bigint(name, { mode: 'number' }).primaryKey().generatedAlwaysAsIdentity();

export const bytes = customType<{ data: Buffer; driverData: Buffer }>({ dataType: () => 'bytea' });
