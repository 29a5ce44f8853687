import { judging } from '../../../shared/contracts/judging.ts';
import type { Context } from '../../context.ts';
import { routesOf } from '../../http/front-door.ts';
import { getReplay, listReplays, startReplay } from '../estimates/replays.ts';
import { estimateSeries } from '../estimates/chart.ts';
import { performanceOf } from './service.ts';

export const judgingRoutes = (context: Context) =>
  routesOf(context, judging, {
    'performance.get': ({ row, query }) =>
      performanceOf(
        context.db,
        row,
        { from: new Date(query.from), to: new Date(query.to) },
        query.updateFactor ?? row.updateFactor,
      ),
    'estimate.series': ({ row, query }) =>
      estimateSeries(context, row, new Date(query.from), new Date(query.to)),
    'replays.list': async ({ row }) => ({ rows: await listReplays(context.db, row) }),
    'replays.start': ({ actor, origin, row, body }) => startReplay(context, { actor, origin }, row, body),
    'replays.get': ({ row }) => getReplay(context.db, row),
  });
