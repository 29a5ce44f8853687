import { laboratory } from '../../../shared/contracts/laboratory.ts';
import type { Context } from '../../context.ts';
import { routesOf } from '../../http/front-door.ts';
import { toWire } from '../../http/wire.ts';
import { readHistory } from './history.ts';
import { precisionOf } from './precision.ts';
import { listHeld } from './repo.ts';
import { answerRetest, askRetest } from './retests.ts';
import { listRetests } from './retests-repo.ts';
import { addResults, addStandard, changeStandard, withdrawResults } from './standards.ts';
import { listStandards } from './standards-repo.ts';
import { correctSample, releaseSample, withdrawSample } from './standing.ts';
import { listUnknownPoints } from './unknown-points.ts';

export const laboratoryRoutes = (context: Context) =>
  routesOf(context, laboratory, {
    'samples.history': ({ row }) => readHistory(context.db, row),
    'samples.correct': ({ actor, origin, row, body }) => correctSample(context, { actor, origin }, row, body),
    'samples.withdraw': ({ actor, origin, row, body }) =>
      withdrawSample(context, { actor, origin }, row, body),
    'samples.held': async ({ row }) => ({ rows: toWire(await listHeld(context.db, row.id)) }),
    'samples.release': ({ actor, origin, row, body }) => releaseSample(context, { actor, origin }, row, body),
    'retests.list': async ({ row }) => ({ rows: toWire(await listRetests(context.db, row.id)) }),
    'retests.ask': ({ actor, origin, row, body }) => askRetest(context, { actor, origin }, row, body),
    'retests.answer': ({ actor, origin, row, body }) => answerRetest(context, { actor, origin }, row, body),
    'samplePoints.unknown': async ({ row }) => ({ rows: await listUnknownPoints(context.db, row.id) }),
    'methods.precision': ({ row }) => precisionOf(context.db, row),
    'checkStandards.list': async ({ row }) => ({
      rows: toWire(await listStandards(context.db, row.siteId, row.id)),
    }),
    'checkStandards.add': ({ actor, origin, row, body }) =>
      addStandard(context, { actor, origin }, row, body),
    'checkStandards.change': ({ actor, origin, row, body }) =>
      changeStandard(context, { actor, origin }, row, body),
    'checkResults.add': ({ actor, origin, row, body }) => addResults(context, { actor, origin }, row, body),
    'checkResults.withdraw': ({ actor, origin, row, body }) =>
      withdrawResults(context, { actor, origin }, row, body),
  });
