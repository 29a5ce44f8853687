import type { Response } from 'express';
import type { Self } from '../../../shared/contracts/people.ts';
import { AppError } from '../../../shared/contracts/errors.ts';
import { passwordMatches, hashPassword } from '../../auth/password.ts';
import { type Sessions, createSessions } from '../../auth/sessions.ts';
import { hashToken, newToken } from '../../auth/token.ts';
import type { Context } from '../../context.ts';
import type { Queryable, Tx } from '../../db/client.ts';
import type { Actor, Origin } from '../../http/request.ts';
import { setCookie } from '../../http/session.ts';
import { recordAudit } from '../audit/service.ts';
import { queueMail } from '../mail/service.ts';
import {
  addLink,
  addPerson,
  anyAdministrator,
  endSessions,
  findActor,
  findLink,
  findPerson,
  findPersonByEmail,
  setPassword,
  useUpLinks,
  type LinkPurpose,
} from './repo.ts';

const linkHours = { 'set-password': 7 * 24, 'reset-password': 2, 'first-administrator': 24 } as const;
const linkGone = () =>
  new AppError(
    'link-used',
    'This link was used already or is too old. Ask for a new one on the sign-in page.',
  );

export const toSelf = (actor: Actor): Self => actor;

/** Signs a person in and sets the cookie; the answer is the same whether address or password is wrong. */
export async function signIn(
  context: Context,
  response: Response,
  given: { email: string; password: string },
  origin: Origin,
): Promise<Self> {
  const person = await findPersonByEmail(context.db, given.email);
  const matches = await passwordMatches(person?.passwordHash, given.password);
  if (!person || !matches || person.deactivatedAt) {
    throw new AppError('wrong-password', 'E-mail address and password don’t go together.', {
      fields: [
        {
          path: 'password',
          message: 'Check the address and the password, or ask for a link to set a new one.',
        },
      ],
    });
  }
  return context.db.transaction((tx) => openSession(context, tx, response, person.id, origin));
}

const sessionsIn = (context: Context, tx: Tx): Sessions =>
  createSessions(tx, context.config.publicUrl.startsWith('https:'));

/** Opens a new session; the one that the browser had, if any, ends. */
async function openSession(
  context: Context,
  tx: Tx,
  response: Response,
  personId: number,
  origin: Origin,
): Promise<Self> {
  const sessions = sessionsIn(context, tx);
  const before = response.locals.sessionId as string | undefined;
  if (before) await sessions.invalidateSession(before);
  const actor = await findActor(tx, personId);
  if (!actor) throw new AppError('not-signed-in', 'This person was deactivated a moment ago.');
  const session = await sessions.createSession(personId, {});
  await note(context, tx, actor, origin, 'sign-in', actor);
  setCookie(response, sessions.createSessionCookie(session.id).serialize());
  return toSelf(actor);
}

export async function signOut(
  context: Context,
  response: Response,
  actor: Actor | null,
  origin: Origin,
): Promise<void> {
  const id = response.locals.sessionId as string | undefined;
  if (id && actor) {
    await context.db.transaction(async (tx) => {
      await sessionsIn(context, tx).invalidateSession(id);
      await note(context, tx, actor, origin, 'sign-out', actor);
    });
  }
  const sessions = response.locals.sessions as Sessions;
  setCookie(response, sessions.createBlankSessionCookie().serialize());
}

/** Makes a one-time link; only its hash is stored, and what was sent before no longer works. */
export async function makeLink(
  context: Context,
  db: Queryable,
  purpose: LinkPurpose,
  personId: number | null,
): Promise<string> {
  const now = context.clock();
  const token = newToken();
  await useUpLinks(db, personId, now);
  await addLink(db, {
    personId,
    purpose,
    tokenHash: hashToken(token),
    expiresAt: new Date(now.getTime() + linkHours[purpose] * 3_600_000),
    createdAt: now,
  });
  return `${context.config.publicUrl}/set-password#${token}`;
}

/** Queues a mail with a link if the address is known; says nothing either way. */
export async function askForLink(context: Context, address: string, origin: Origin): Promise<void> {
  await context.db.transaction(async (tx) => {
    const person = await findPersonByEmail(tx, address);
    if (!person || person.deactivatedAt) return;
    await queueLinkMail(context, tx, person, person.passwordHash ? 'reset-password' : 'set-password');
    const nobody = { id: null, name: 'Somebody not signed in' };
    await note(context, tx, nobody, origin, 'ask-for-link', person);
  });
}

export async function queueLinkMail(
  context: Context,
  tx: Tx,
  person: { id: number; name: string; email: string },
  purpose: 'set-password' | 'reset-password',
): Promise<void> {
  await queueMail(context, tx, {
    key: `${purpose}:${person.id}:${newToken().slice(0, 12)}`,
    personId: person.id,
    toAddress: person.email,
    template: purpose,
    figures: { name: person.name, hours: linkHours[purpose] },
  });
}

export async function readLink(context: Context, token: string) {
  const link = await findLink(context.db, hashToken(token), context.clock(), false);
  if (!link) throw linkGone();
  const person = link.personId === null ? null : await findPerson(context.db, link.personId);
  return { purpose: link.purpose as LinkPurpose, name: person?.name ?? null, email: person?.email ?? null };
}

/** Sets a password with a link, ends every session the person had, and signs in. */
export async function useLink(
  context: Context,
  response: Response,
  given: { token: string; password: string; name?: string; email?: string },
  origin: Origin,
): Promise<Self> {
  const passwordHash = await hashPassword(given.password);
  return context.db.transaction(async (tx) => {
    const now = context.clock();
    const link = await findLink(tx, hashToken(given.token), now, true);
    if (!link) throw linkGone();
    const id = link.personId ?? (await addFirstAdministrator(tx, given));
    const person = (await findPerson(tx, id))!;
    if (person.deactivatedAt) throw linkGone();
    await setPassword(tx, id, passwordHash);
    await useUpLinks(tx, link.personId, now);
    await note(context, tx, person, origin, 'set-password', person);
    await endSessions(tx, id);
    return openSession(context, tx, response, id, origin);
  });
}

async function addFirstAdministrator(tx: Tx, given: { name?: string; email?: string }): Promise<number> {
  if (await anyAdministrator(tx)) throw linkGone();
  const fields = [
    ...(given.name ? [] : [{ path: 'name', message: 'Write your name.' }]),
    ...(given.email ? [] : [{ path: 'email', message: 'Write your e-mail address.' }]),
  ];
  if (fields.length > 0)
    throw new AppError('invalid-input', 'Name and e-mail address are missing.', { fields });
  const person = await addPerson(tx, { name: given.name!, email: given.email!, administrator: true });
  return person.id;
}

async function note(
  context: Context,
  tx: Tx,
  actor: { id: number | null; name: string },
  origin: Origin,
  action: 'sign-in' | 'sign-out' | 'ask-for-link' | 'set-password',
  person: Pick<Actor, 'id' | 'name'>,
): Promise<void> {
  await recordAudit(tx, {
    at: context.clock(),
    siteId: null,
    actor,
    origin,
    action,
    entity: 'person',
    entityId: person.id,
    entityName: person.name,
  });
}
