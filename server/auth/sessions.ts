import { DrizzlePostgreSQLAdapter } from '@lucia-auth/adapter-drizzle';
import { type Adapter, type DatabaseSession, Lucia, TimeSpan } from 'lucia';
import type { Queryable } from '../db/client.ts';
import { persons, sessions } from '../db/schema/index.ts';
import { hashToken } from './token.ts';

declare module 'lucia' {
  interface Register {
    Lucia: Sessions;
    UserId: number;
  }
}

/**
 * Upstream keeps the session id as it is in the table, so that a dump of it would open every session. This adapter
 * stands between: the table holds only the SHA-256, the browser alone the id.
 */
class HashingAdapter implements Adapter {
  readonly #inner: Adapter;

  constructor(inner: Adapter) {
    this.#inner = inner;
  }

  async getSessionAndUser(id: string): ReturnType<Adapter['getSessionAndUser']> {
    const [session, user] = await this.#inner.getSessionAndUser(hashToken(id));
    return session === null ? [null, null] : [{ ...session, id }, user!];
  }

  async getUserSessions(userId: number): Promise<DatabaseSession[]> {
    return this.#inner.getUserSessions(userId);
  }

  setSession(session: DatabaseSession): Promise<void> {
    return this.#inner.setSession({ ...session, id: hashToken(session.id) });
  }

  updateSessionExpiration(id: string, expiresAt: Date): Promise<void> {
    return this.#inner.updateSessionExpiration(hashToken(id), expiresAt);
  }

  deleteSession(id: string): Promise<void> {
    return this.#inner.deleteSession(hashToken(id));
  }

  deleteUserSessions(userId: number): Promise<void> {
    return this.#inner.deleteUserSessions(userId);
  }

  deleteExpiredSessions(): Promise<void> {
    return this.#inner.deleteExpiredSessions();
  }
}

export const sessionCookie = 'cupel_session';

/** Sessions of 14 days, extended while used; inside a transaction they come and go with it. */
export function createSessions(db: Queryable, secure: boolean) {
  return new Lucia(
    new HashingAdapter(new DrizzlePostgreSQLAdapter(db as never, sessions, persons as never)),
    {
      sessionExpiresIn: new TimeSpan(14, 'd'),
      sessionCookie: { name: sessionCookie, attributes: { secure, sameSite: 'lax' } },
    },
  );
}
export type Sessions = ReturnType<typeof createSessions>;
