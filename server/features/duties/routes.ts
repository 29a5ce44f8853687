import { duties } from '../../../shared/contracts/duties.ts';
import type { Context } from '../../context.ts';
import { routesOf } from '../../http/front-door.ts';
import { reassignDuty, waiveDuty } from './attend.ts';
import { countOpenDuties, listDuties } from './list.ts';
import { addReview, listReviews } from './reviews.ts';

export const dutyRoutes = (context: Context) =>
  routesOf(context, duties, {
    'duties.mine': async ({ actor, siteIds, query }) => {
      const filter = { ...query, actor, siteIds, now: context.clock() };
      return { ...(await listDuties(context.db, filter)), ...(await countOpenDuties(context.db, filter)) };
    },
    'duties.waive': ({ actor, origin, row, body }) => waiveDuty(context, { actor, origin }, row, body),
    'duties.reassign': ({ actor, origin, row, body }) => reassignDuty(context, { actor, origin }, row, body),
    'reviews.add': ({ actor, origin, row, body }) => addReview(context, { actor, origin }, row, body),
    'reviews.list': async ({ row }) => ({ rows: await listReviews(context.db, row.siteId, row.id) }),
  });
