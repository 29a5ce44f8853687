import type { RequestHandler, Response } from 'express';
import { verifyRequestOrigin } from 'lucia';
import { randomUUID } from 'node:crypto';
import { AppError } from '../../shared/contracts/errors.ts';
import type { Sessions } from '../auth/sessions.ts';
import type { Context } from '../context.ts';
import { findActor } from '../features/people/repo.ts';

/** Gives each request a number that stands in its log line, its audit rows and its problem details. */
export const numberRequests: RequestHandler = (_request, response, next) => {
  response.locals.requestId = randomUUID();
  response.setHeader('X-Request-Id', response.locals.requestId as string);
  next();
};

/** A change is only taken from our own pages: the Origin header must name this host. */
export function checkOrigin(context: Context): RequestHandler {
  const publicHost = new URL(context.config.publicUrl).host;
  return (request, _response, next) => {
    if (request.method === 'GET' || request.method === 'HEAD') return next();
    const origin = request.headers.origin;
    const host = request.headers.host;
    if (origin && verifyRequestOrigin(origin, [publicHost, ...(host ? [host] : [])])) return next();
    throw new AppError(
      'foreign-origin',
      'This change came from another page than Cupel’s own, so it was not made.',
    );
  };
}

/** Loads the signed-in person; an ended session is simply nobody. */
export function loadActor(context: Context, sessions: Sessions): RequestHandler {
  return async (request, response, next) => {
    response.locals.sessions = sessions;
    const id = sessions.readSessionCookie(request.headers.cookie ?? '');
    if (id) {
      const { session } = await sessions.validateSession(id);
      if (session?.fresh) setCookie(response, sessions.createSessionCookie(session.id).serialize());
      const actor = session ? await findActor(context.db, session.userId) : null;
      response.locals.sessionId = actor ? id : undefined;
      response.locals.actor = actor;
      if (!actor) setCookie(response, sessions.createBlankSessionCookie().serialize());
    }
    next();
  };
}

export function setCookie(response: Response, cookie: string): void {
  response.appendHeader('Set-Cookie', cookie);
}
