import { z } from 'zod';
import { roles } from './access.ts';
import { endpoint, idNumber, ids, isoInstant, nothing, shortText, version } from './endpoint.ts';

export const role = z.enum(roles);
export const email = z
  .string()
  .trim()
  .max(254)
  .email('This is no e-mail address. One looks like name@company.example.');
export const newPassword = z
  .string()
  .min(12, 'Use at least 12 characters; a few words in a row are easy to remember.')
  .max(200, 'Use at most 200 characters.');

export const siteRole = z.object({ siteId: idNumber, role });

/** The signed-in person: who, and what roles where. */
export const self = z.object({
  id: idNumber,
  name: z.string(),
  email: z.string(),
  administrator: z.boolean(),
  roles: z.array(siteRole),
});
export type Self = z.infer<typeof self>;

export const person = z.object({
  id: idNumber,
  name: z.string(),
  email: z.string(),
  administrator: z.boolean(),
  roles: z.array(siteRole),
  hasPassword: z.boolean(),
  deactivatedAt: isoInstant.nullable(),
  version,
});
export type Person = z.infer<typeof person>;

const personFields = {
  name: shortText('the name'),
  email,
  administrator: z.boolean(),
  roles: z.array(siteRole).max(400),
};

const exampleSelf = {
  id: 3,
  name: 'Marco Castellane',
  email: 'marco.castellane@tarnby.example',
  administrator: false,
  roles: [{ siteId: 1, role: 'engineer' as const }],
};
const examplePerson = { ...exampleSelf, hasPassword: true, deactivatedAt: null, version: 1 };
const done = z.object({ done: z.literal(true) });

export const people = {
  'auth.self': endpoint({
    method: 'GET',
    path: '/self',
    kind: 'json',
    summary: 'Who is signed in',
    access: 'public',
    reply: z.object({ self: self.nullable() }),
    example: { self: exampleSelf },
  }),
  'auth.signIn': endpoint({
    method: 'POST',
    path: '/session',
    kind: 'json',
    summary: 'Sign in',
    access: 'public',
    body: z.object({ email, password: z.string().min(1, 'Write your password.').max(200) }),
    reply: self,
    example: exampleSelf,
  }),
  'auth.signOut': endpoint({
    method: 'DELETE',
    path: '/session',
    kind: 'json',
    summary: 'Sign out',
    access: 'public',
    reply: done,
    example: { done: true },
  }),
  'auth.askForLink': endpoint({
    method: 'POST',
    path: '/password-links',
    kind: 'json',
    summary: 'Ask for a link to set a new password; the answer never tells whether the address is known',
    access: 'public',
    body: z.object({ email }),
    reply: done,
    example: { done: true },
  }),
  'auth.readLink': endpoint({
    method: 'POST',
    path: '/password-links/read',
    kind: 'json',
    summary: 'What a one-time link is for',
    access: 'public',
    body: z.object({ token: z.string().min(20).max(200) }),
    reply: z.object({
      purpose: z.enum(['set-password', 'reset-password', 'first-administrator']),
      name: z.string().nullable(),
      email: z.string().nullable(),
    }),
    example: { purpose: 'set-password', name: 'Tove Halbrook', email: 'tove.halbrook@tarnby.example' },
  }),
  'auth.useLink': endpoint({
    method: 'POST',
    path: '/password-links/use',
    kind: 'json',
    summary: 'Set a password with a one-time link, and sign in',
    access: 'public',
    body: z.object({
      token: z.string().min(20).max(200),
      password: newPassword,
      name: shortText('your name').optional(),
      email: email.optional(),
    }),
    reply: self,
    example: exampleSelf,
  }),
  'people.list': endpoint({
    method: 'GET',
    path: '/people',
    kind: 'json',
    summary: 'All people with their roles',
    access: { may: 'company.administer', on: 'company' },
    reply: z.object({ rows: z.array(person) }),
    example: { rows: [examplePerson] },
  }),
  'people.add': endpoint({
    method: 'POST',
    path: '/people',
    kind: 'json',
    summary: 'Add a person and mail a link to set a password',
    access: { may: 'company.administer', on: 'company' },
    body: z.object(personFields),
    reply: person,
    example: examplePerson,
  }),
  'people.change': endpoint({
    method: 'PUT',
    path: '/people/:personId',
    kind: 'json',
    summary: 'Change a person’s name, address and roles, deactivate or take back',
    access: { may: 'company.administer', on: 'company' },
    params: ids('personId'),
    body: z.object({ ...personFields, deactivated: z.boolean(), version }),
    reply: person,
    example: examplePerson,
  }),
  'people.sendLink': endpoint({
    method: 'POST',
    path: '/people/:personId/password-links',
    kind: 'json',
    summary: 'Mail a person a new link to set a password',
    access: { may: 'company.administer', on: 'company' },
    params: ids('personId'),
    body: nothing,
    reply: done,
    example: { done: true },
  }),
  'people.atSite': endpoint({
    method: 'GET',
    path: '/sites/:siteId/people',
    kind: 'json',
    summary: 'Active people with a role at a site, to name owners and approvers',
    access: { may: 'site.view', on: 'site' },
    params: ids('siteId'),
    reply: z.object({ rows: z.array(z.object({ id: idNumber, name: z.string(), roles: z.array(role) })) }),
    example: { rows: [{ id: 3, name: 'Marco Castellane', roles: ['engineer'] }] },
  }),
};
