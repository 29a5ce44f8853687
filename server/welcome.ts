import type { Context } from './context.ts';
import { anyAdministrator } from './features/people/repo.ts';
import { makeLink } from './features/people/sign-in.ts';
import { demoSignIns, keepDemoUpToDate, seedDemo } from '../seeds/demo.ts';

/**
 * What a newcomer needs to get in: in the cluster of `npm start` the demo and its sign-ins, elsewhere a one-time link
 * for the first administrator.
 */
export async function welcome(context: Context): Promise<string[]> {
  const empty = !(await anyAdministrator(context.db));
  if (context.config.demoAllowed) {
    if (empty) {
      process.stdout.write('Putting in the example company with half a year of history: about a minute …\n');
      await seedDemo(context);
    }
    return [...(await keepDemoUpToDate(context)), ...(await demoSignIns(context))];
  }
  if (!empty) return [];
  const link = await makeLink(context, context.db, 'first-administrator', null);
  return ['There is no administrator yet. Set one up with this link; it works once, for 24 hours:', link];
}
