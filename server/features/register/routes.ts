import { models } from '../../../shared/contracts/models.ts';
import { register } from '../../../shared/contracts/register.ts';
import type { Context } from '../../context.ts';
import { routesOf } from '../../http/front-door.ts';
import { toWire } from '../../http/wire.ts';
import { listRevisions, listSensors } from './repo.ts';
import { putBack, sayWhySuspended, suspend } from './life.ts';
import { decideRevision, proposeRevision, saveDraft, startFit, withdrawRevision } from './revisions.ts';
import { changeSensor, registerSensor } from './service.ts';
import { readSheet, toRevision } from './sheet.ts';

export const registerRoutes = (context: Context) =>
  routesOf(
    context,
    { ...register, ...models },
    {
      'register.list': async ({ siteIds, query }) => {
        const rows = await listSensors(context.db, siteIds, query.siteId);
        return { rows: rows.map((row) => ({ ...toWire(row), reasons: row.reasons ?? [] })) };
      },
      'register.add': ({ actor, origin, row, body }) => registerSensor(context, { actor, origin }, row, body),
      'register.get': ({ row }) => readSheet(context.db, row, context.clock()),
      'register.change': ({ actor, origin, row, body }) =>
        changeSensor(context, { actor, origin }, row, body),
      'drafts.save': ({ actor, origin, row, body }) => saveDraft(context, { actor, origin }, row, body),
      'drafts.fit': ({ actor, origin, row, body }) => startFit(context, { actor, origin }, row, body),
      'revisions.list': async ({ row }) => ({
        rows: (await listRevisions(context.db, row.siteId, row.id)).map(toRevision),
      }),
      'revisions.propose': ({ actor, origin, row, body }) =>
        proposeRevision(context, { actor, origin }, row, body),
      'revisions.decide': ({ actor, origin, row, body }) =>
        decideRevision(context, { actor, origin }, row, body),
      'revisions.withdraw': ({ actor, origin, row }) => withdrawRevision(context, { actor, origin }, row),
      'life.suspend': ({ actor, origin, row, body }) => suspend(context, { actor, origin }, row, body.reason),
      'life.reason': ({ actor, origin, row, body }) =>
        sayWhySuspended(context, { actor, origin }, row, body.reason),
      'life.putBack': ({ actor, origin, row }) => putBack(context, { actor, origin }, row),
    },
  );
