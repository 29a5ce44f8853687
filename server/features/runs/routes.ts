import { runs } from '../../../shared/contracts/runs.ts';
import type { Context } from '../../context.ts';
import { routesOf } from '../../http/front-door.ts';
import { toWire } from '../../http/wire.ts';
import { requestCancel } from './repo.ts';

export const runRoutes = (context: Context) =>
  routesOf(context, runs, {
    'runs.get': async ({ row }) => toWire({ ...row }),
    'runs.cancel': async ({ row }) => toWire(await requestCancel(context.db, row.siteId, row.id)),
  });
