import { AppError } from '../../../shared/contracts/errors.ts';
import { ownership } from '../../../shared/contracts/ownership.ts';
import { sitesWhere } from '../../../shared/rules/permissions.ts';
import type { Context } from '../../context.ts';
import { routesOf } from '../../http/front-door.ts';
import type { Actor } from '../../http/request.ts';
import { dutyFacts } from '../duties/facts.ts';
import { declinedLately, ownershipHistory, waitingFor, waitingOf } from './repo.ts';
import { responsibilitiesOf } from './responsibilities.ts';
import { answerHandover, proposeHandover, withdrawHandover } from './service.ts';

export const ownershipRoutes = (context: Context) =>
  routesOf(context, ownership, {
    'ownership.history': async ({ actor, row }) => {
      const rows = await ownershipHistory(context.db, row.siteId, row.id);
      const [facts] = await dutyFacts(context.db, context.clock(), {
        siteId: row.siteId,
        softSensorId: row.id,
      });
      const now = rows[0];
      const engineer = holds(actor, row.siteId, 'engineer');
      const own = actor.id === now?.owner?.id || actor.id === now?.deputy?.id;
      return {
        rows,
        gaps: [...(facts?.gap.codes ?? [])],
        waiting: await waitingOf(context.db, actor, row.siteId, row.id),
        mayOffer: holds(actor, row.siteId, 'manager') || (engineer && own),
        mayNameSelf: engineer,
      };
    },
    'handovers.propose': ({ actor, origin, row, body }) =>
      proposeHandover(context, { actor, origin }, row, body),
    'handovers.answer': ({ actor, origin, row, body }) =>
      answerHandover(context, { actor, origin }, row, body),
    'handovers.withdraw': ({ actor, origin, row }) => withdrawHandover(context, { actor, origin }, row),
    'handovers.waiting': async ({ actor }) => {
      const siteIds = sitesWhere(actor, 'site.view');
      const waiting = await waitingFor(context.db, actor, siteIds);
      const declined = await declinedLately(context.db, actor, siteIds, context.clock());
      const mine = ({ to }: { to: { id: number } }) => to.id === actor.id;
      return { toAnswer: waiting.filter(mine), offered: waiting.filter((row) => !mine(row)), declined };
    },
    'people.responsibilities': async ({ params }) => {
      const found = await responsibilitiesOf(context.db, params.personId);
      if (!found) throw new AppError('not-found', 'There is no such person.');
      return found;
    },
  });

const holds = (actor: Actor, siteId: number, role: string): boolean =>
  actor.roles.some((held) => held.siteId === siteId && held.role === role);
