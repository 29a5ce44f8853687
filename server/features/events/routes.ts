import { events } from '../../../shared/contracts/events.ts';
import type { Context } from '../../context.ts';
import type { Queryable } from '../../db/client.ts';
import { routesOf } from '../../http/front-door.ts';
import { toWire } from '../../http/wire.ts';
import { takeFile } from './file.ts';
import { type EventFilter, listEvents, listStandstills } from './repo.ts';
import { addEvent, withdrawEvent } from './service.ts';

export const eventRoutes = (context: Context) =>
  routesOf(context, events, {
    'events.list': ({ row, query }) => listed(context.db, row.id, query, context.clock()),
    'events.ofSensor': ({ row, query }) =>
      listed(context.db, row.siteId, { ...query, sensor: row }, context.clock()),
    'events.add': ({ actor, origin, row, body }) => addEvent(context, { actor, origin }, row, body),
    'events.upload': ({ actor, origin, row, upload, query }) =>
      takeFile(context, { actor, origin }, row, upload, query),
    'events.withdraw': ({ actor, origin, row, body }) =>
      withdrawEvent(context, { actor, origin }, row, body.reason),
  });

async function listed(db: Queryable, siteId: number, filter: EventFilter, now: Date) {
  const stopped = await listStandstills(db, siteId, now, filter.sensor);
  return toWire({ ...(await listEvents(db, siteId, filter)), stopped });
}
