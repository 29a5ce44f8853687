import { runs } from '../../../shared/contracts/runs.ts';
import type { Context } from '../../context.ts';
import { routesOf } from '../../http/front-door.ts';
import { toWire } from '../../http/wire.ts';
import { cancelRun } from './service.ts';

export const runRoutes = (context: Context) =>
  routesOf(context, runs, {
    'runs.get': async ({ row }) => toWire({ ...row }),
    'runs.cancel': async ({ actor, origin, row }) => toWire(await cancelRun(context, { actor, origin }, row)),
  });
