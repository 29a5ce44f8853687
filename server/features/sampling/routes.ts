import { sampling } from '../../../shared/contracts/sampling.ts';
import type { Context } from '../../context.ts';
import { routesOf } from '../../http/front-door.ts';
import { askedFor } from './asked.ts';
import { enterSample } from './enter.ts';
import { recordNotTaken } from './not-taken.ts';
import { askForSamples, openRequests, withdrawRequest } from './requests.ts';

export const samplingRoutes = (context: Context) =>
  routesOf(context, sampling, {
    'sampling.asked': ({ row, query }) =>
      askedFor(context.db, row, query.shift ?? 'current', context.clock()),
    'sampling.enter': ({ actor, origin, row, body }) => enterSample(context, { actor, origin }, row, body),
    'sampling.notTaken': ({ actor, origin, row, body }) =>
      recordNotTaken(context, { actor, origin }, row, body),
    'sampling.requests': async ({ row }) => ({
      rows: await openRequests(context.db, row.id, context.clock()),
    }),
    'sampling.ask': ({ actor, origin, row, body }) => askForSamples(context, { actor, origin }, row, body),
    'sampling.withdraw': ({ actor, origin, row, body }) =>
      withdrawRequest(context, { actor, origin }, row, body),
  });
