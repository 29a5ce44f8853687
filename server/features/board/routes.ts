import { boards } from '../../../shared/contracts/board.ts';
import type { Context } from '../../context.ts';
import { routesOf } from '../../http/front-door.ts';
import { noteLook } from './look.ts';
import { readBoard } from './service.ts';

export const boardRoutes = (context: Context) =>
  routesOf(context, boards, {
    'board.get': ({ actor, siteIds, query }) => readBoard(context, actor, { ...query, siteIds }),
    'board.looked': ({ actor }) => noteLook(context, actor.id),
  });
