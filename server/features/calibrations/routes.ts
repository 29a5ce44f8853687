import { calibrations } from '../../../shared/contracts/calibrations.ts';
import type { Context } from '../../context.ts';
import { routesOf } from '../../http/front-door.ts';
import { enterCalibration, withdrawCalibration } from './after.ts';
import { confirmAsFound } from './confirm.ts';
import { evidenceNow } from './evidence.ts';
import { readRecord } from './record.ts';
import { listCalibrations } from './repo.ts';
import { decideCalibration, proposeCalibration } from './service.ts';

export const calibrationRoutes = (context: Context) =>
  routesOf(context, calibrations, {
    'calibrations.evidence': async ({ row }) => (await evidenceNow(context.db, row, context.clock())).reply,
    'calibrations.list': async ({ row }) => ({
      rows: await listCalibrations(context.db, row.siteId, row.id),
    }),
    'calibrations.get': ({ row }) => readRecord(context.db, row, context.clock()),
    'calibrations.propose': ({ actor, origin, row, body }) =>
      proposeCalibration(context, { actor, origin }, row, body),
    'calibrations.decide': ({ actor, origin, row, body }) =>
      decideCalibration(context, { actor, origin }, row, body),
    'calibrations.withdraw': ({ actor, origin, row }) => withdrawCalibration(context, { actor, origin }, row),
    'calibrations.enter': ({ actor, origin, row, body }) =>
      enterCalibration(context, { actor, origin }, row, body),
    'calibrations.confirm': ({ actor, origin, siteIds, body }) =>
      confirmAsFound(context, { actor, origin }, siteIds, body.softSensorIds),
  });
