import { and, eq, isNotNull, isNull, ne, sql } from 'drizzle-orm';
import type { z } from 'zod';
import type { people, Person } from '../../../shared/contracts/people.ts';
import { AppError } from '../../../shared/contracts/errors.ts';
import type { Context } from '../../context.ts';
import type { Tx } from '../../db/client.ts';
import { persons } from '../../db/schema/index.ts';
import type { Actor, Origin } from '../../http/request.ts';
import { toWire } from '../../http/wire.ts';
import { stale } from '../../http/stale.ts';
import { syncDutiesOfPerson } from '../duties/service.ts';
import { lastSaveOf, recordAudit } from '../audit/service.ts';
import {
  addPerson,
  endSessions,
  findPersonByEmail,
  listPeople,
  openSiteIds,
  replaceRoles,
  useUpLinks,
} from './repo.ts';
import { queueLinkMail } from './sign-in.ts';

type NewPerson = z.output<(typeof people)['people.add']['body']>;
type ChangedPerson = z.output<(typeof people)['people.change']['body']>;

export const everybody = async (context: Context): Promise<Person[]> => toWire(await listPeople(context.db));

async function personNow(tx: Tx, id: number): Promise<Person> {
  const found = (await listPeople(tx)).find((row) => row.id === id);
  if (!found) throw new AppError('not-found', 'There is no such person.');
  return toWire(found);
}

/** Adds a person and mails them a link to set their password. */
export async function addNewPerson(
  context: Context,
  actor: Actor,
  body: NewPerson,
  origin: Origin,
): Promise<Person> {
  return context.db.transaction(async (tx) => {
    await refuseTakenAddress(tx, body.email, null);
    await refuseOtherSites(tx, body.roles);
    const person = await addPerson(tx, {
      name: body.name,
      email: body.email,
      administrator: body.administrator,
    });
    await replaceRoles(tx, person.id, body.roles);
    await queueLinkMail(context, tx, person, 'set-password');
    const after = await personNow(tx, person.id);
    await note(context, tx, actor, origin, 'add', null, after);
    return after;
  });
}

/** Changes a person; deactivating ends their sessions at once. The last administrator can't be taken away. */
export async function changePerson(
  context: Context,
  actor: Actor,
  personId: number,
  body: ChangedPerson,
  origin: Origin,
): Promise<Person> {
  const after = await context.db.transaction(async (tx) => {
    // Two administrators who take each other's right away at the same moment would leave none.
    await tx.execute(sql`select pg_advisory_xact_lock(hashtext('cupel-administrators'))`);
    const before = await personNow(tx, personId);
    if (before.version !== body.version)
      throw stale('person', before, await lastSaveOf(tx, 'person', personId));
    await refuseTakenAddress(tx, body.email, personId);
    await refuseOtherSites(tx, body.roles);
    if (!body.administrator || body.deactivated) await refuseLastAdministrator(tx, personId);
    await tx
      .update(persons)
      .set({
        name: body.name,
        email: body.email,
        administrator: body.administrator,
        deactivatedAt: body.deactivated
          ? before.deactivatedAt
            ? new Date(before.deactivatedAt)
            : context.clock()
          : null,
        version: body.version + 1,
      })
      .where(eq(persons.id, personId));
    await replaceRoles(tx, personId, body.roles);
    await syncDutiesOfPerson(tx, personId, context.clock());
    if (body.deactivated) await endSessions(tx, personId);
    // A link that is out would still let in whoever reads the old address.
    if (body.deactivated || body.email !== before.email) await useUpLinks(tx, personId, context.clock());
    const now = await personNow(tx, personId);
    await note(context, tx, actor, origin, 'change', before, now);
    return now;
  });
  return after;
}

export async function sendLinkTo(
  context: Context,
  actor: Actor,
  personId: number,
  origin: Origin,
): Promise<void> {
  await context.db.transaction(async (tx) => {
    const person = await personNow(tx, personId);
    if (person.deactivatedAt)
      throw new AppError('conflict', `${person.name} is deactivated. Take them back first.`);
    await queueLinkMail(context, tx, person, person.hasPassword ? 'reset-password' : 'set-password');
    await note(context, tx, actor, origin, 'start', null, { ...person });
  });
}

async function refuseTakenAddress(tx: Tx, email: string, exceptId: number | null): Promise<void> {
  const other = await findPersonByEmail(tx, email);
  if (!other || other.id === exceptId) return;
  const message = `${other.name} has this address already.`;
  throw new AppError('invalid-input', message, { fields: [{ path: 'email', message }] });
}

async function refuseOtherSites(tx: Tx, roles: NewPerson['roles']): Promise<void> {
  const open = await openSiteIds(tx);
  if (roles.every(({ siteId }) => open.has(siteId))) return;
  const message = 'A role was given at a site that is archived or not there. Load the page again.';
  throw new AppError('invalid-input', message, { fields: [{ path: 'roles', message }] });
}

/** Whoever never set a password can't be counted on to let anybody in again. */
async function refuseLastAdministrator(tx: Tx, personId: number): Promise<void> {
  const others = await tx.$count(
    persons,
    and(
      eq(persons.administrator, true),
      isNull(persons.deactivatedAt),
      isNotNull(persons.passwordHash),
      ne(persons.id, personId),
    ),
  );
  if (others > 0) return;
  const message =
    'This is the last administrator who can sign in. Make somebody else an administrator first, and let them set a password.';
  throw new AppError('invalid-input', message, { fields: [{ path: 'administrator', message }] });
}

async function note(
  context: Context,
  tx: Tx,
  actor: Actor,
  origin: Origin,
  action: 'add' | 'change' | 'start',
  before: Person | null,
  after: Person,
): Promise<void> {
  await recordAudit(tx, {
    at: context.clock(),
    siteId: null,
    actor,
    origin,
    action,
    entity: action === 'start' ? 'password link' : 'person',
    entityId: after.id,
    entityName: after.name,
    before,
    after: action === 'start' ? null : after,
  });
}
