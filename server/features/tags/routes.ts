import { tags } from '../../../shared/contracts/tags.ts';
import type { Context } from '../../context.ts';
import { routesOf } from '../../http/front-door.ts';
import { toWire } from '../../http/wire.ts';
import { listTags } from './repo.ts';
import { addTags, changeTag, removeTagReadings, tagSeries } from './service.ts';

export const tagRoutes = (context: Context) =>
  routesOf(context, tags, {
    'tags.list': async ({ row, query }) => ({ rows: toWire(await listTags(context.db, row.id, query)) }),
    'tags.add': async ({ actor, origin, row, body }) => ({
      rows: await addTags(context, { actor, origin }, row, body.tags),
    }),
    'tags.change': ({ actor, origin, row, body }) => changeTag(context, { actor, origin }, row, body),
    'tags.series': ({ row, query }) => tagSeries(context, row, new Date(query.from), new Date(query.to)),
    'tags.removeReadings': async ({ actor, origin, row, body }) => ({
      removed: await removeTagReadings(context, { actor, origin }, row, body),
    }),
  });
