import { DrizzleQueryError } from 'drizzle-orm';
import { describe, expect, it } from 'vitest';
import { createLog } from '../../server/log.ts';

describe('the log', () => {
  it('tells an error without the values of its query', () => {
    const log = createLog('error');
    const serialise = log[Symbol.for('pino.serializers') as never] as Record<
      string,
      (error: unknown) => unknown
    >;
    const error = new DrizzleQueryError('select $1', ['a secret'], new Error('no such table'));
    const told = JSON.stringify(serialise.err!(error));
    expect(told).toContain('no such table');
    expect(told).toContain('select $1');
    expect(told).not.toContain('a secret');
  });
});
