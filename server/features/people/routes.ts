import { people } from '../../../shared/contracts/people.ts';
import type { Context } from '../../context.ts';
import { routesOf } from '../../http/front-door.ts';
import { listPeopleAtSite } from './repo.ts';
import { addNewPerson, changePerson, everybody, sendLinkTo } from './service.ts';
import { askForLink, readLink, signIn, signOut, useLink } from './sign-in.ts';

const done = { done: true } as const;

export const peopleRoutes = (context: Context) =>
  routesOf(context, people, {
    'auth.self': async ({ actor }) => ({ self: actor }),
    'auth.signIn': ({ body, response, origin }) => signIn(context, response, body, origin),
    'auth.signOut': async ({ actor, response, origin }) => {
      await signOut(context, response, actor, origin);
      return done;
    },
    'auth.askForLink': async ({ body, origin }) => {
      await askForLink(context, body.email, origin);
      return done;
    },
    'auth.readLink': ({ body }) => readLink(context, body.token),
    'auth.useLink': ({ body, response, origin }) => useLink(context, response, body, origin),
    'people.list': async () => ({ rows: await everybody(context) }),
    'people.add': ({ body, actor, origin }) => addNewPerson(context, actor, body, origin),
    'people.change': ({ params, body, actor, origin }) =>
      changePerson(context, actor, params.personId, body, origin),
    'people.sendLink': async ({ params, actor, origin }) => {
      await sendLinkTo(context, actor, params.personId, origin);
      return done;
    },
    'people.atSite': async ({ row }) => ({ rows: await listPeopleAtSite(context.db, row.id) }),
  });
