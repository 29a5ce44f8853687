import { sites } from '../../../shared/contracts/sites.ts';
import type { Context } from '../../context.ts';
import { routesOf } from '../../http/front-door.ts';
import { toWire } from '../../http/wire.ts';
import { listAreas, listSites, listUnits } from './repo.ts';
import { addArea, addSite, addUnit, changeArea, changeSite, changeUnit } from './service.ts';

export const siteRoutes = (context: Context) =>
  routesOf(context, sites, {
    'sites.list': async ({ siteIds }) => ({ rows: toWire(await listSites(context.db, siteIds)) }),
    'sites.add': ({ actor, origin, body }) => addSite(context, { actor, origin }, body),
    'sites.change': ({ actor, origin, row, body }) => changeSite(context, { actor, origin }, row, body),
    'areas.list': async ({ row }) => ({ rows: toWire(await listAreas(context.db, row.id)) }),
    'areas.add': ({ actor, origin, row, body }) => addArea(context, { actor, origin }, row, body),
    'areas.change': ({ actor, origin, row, body }) => changeArea(context, { actor, origin }, row, body),
    'units.list': async ({ row }) => ({ rows: toWire(await listUnits(context.db, row.id)) }),
    'units.add': ({ actor, origin, row, body }) => addUnit(context, { actor, origin }, row, body),
    'units.change': ({ actor, origin, row, body }) => changeUnit(context, { actor, origin }, row, body),
  });
