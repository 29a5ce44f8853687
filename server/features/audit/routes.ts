import { audit } from '../../../shared/contracts/audit.ts';
import type { Context } from '../../context.ts';
import { routesOf } from '../../http/front-door.ts';
import { toWire } from '../../http/wire.ts';
import { listAudit } from './repo.ts';

export const auditRoutes = (context: Context) =>
  routesOf(context, audit, {
    'audit.list': async ({ siteIds, query }) => {
      const { rows, total } = await listAudit(context.db, siteIds, query);
      return { rows: toWire(rows), total };
    },
  });
