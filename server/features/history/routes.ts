import { history } from '../../../shared/contracts/history.ts';
import type { Context } from '../../context.ts';
import { routesOf } from '../../http/front-door.ts';
import { toWire } from '../../http/wire.ts';
import { listImports } from './repo.ts';
import { addUpload, resumeImport, startImport, viewImport } from './service.ts';

export const historyRoutes = (context: Context) =>
  routesOf(context, history, {
    'history.list': async ({ row }) => ({ rows: toWire(await listImports(context.db, row.id)) }),
    'history.upload': ({ actor, origin, row, upload }) => addUpload(context, { actor, origin }, row, upload),
    'history.get': ({ row, query }) => viewImport(context, row, query),
    'history.start': ({ actor, origin, row, body }) => startImport(context, { actor, origin }, row, body),
    'history.resume': ({ actor, origin, row }) => resumeImport(context, { actor, origin }, row),
  });
