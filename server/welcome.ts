import type { Context } from './context.ts';
import { anyAdministrator } from './features/people/repo.ts';
import { makeLink } from './features/people/sign-in.ts';
import { demoSignIns, seedDemo } from '../seeds/demo.ts';

/**
 * What a newcomer needs to get in: in the cluster of `npm start` the demo and its sign-ins, elsewhere a one-time link
 * for the first administrator.
 */
export async function welcome(context: Context): Promise<string[]> {
  if (await anyAdministrator(context.db)) return context.config.demoAllowed ? demoSignIns(context) : [];
  if (context.config.demoAllowed) {
    await seedDemo(context);
    return demoSignIns(context);
  }
  const link = await makeLink(context, context.db, 'first-administrator', null);
  return ['There is no administrator yet. Set one up with this link; it works once, for 24 hours:', link];
}
