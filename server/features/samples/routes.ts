import { samples } from '../../../shared/contracts/samples.ts';
import type { Context } from '../../context.ts';
import { routesOf } from '../../http/front-door.ts';
import { toWire } from '../../http/wire.ts';
import { commitImport, undoImport } from './commit.ts';
import { addUpload, mendRows, refusedRows, sayMapping } from './imports.ts';
import { viewImport } from './import-view.ts';
import { listImports } from './imports-repo.ts';
import { addMethod, addSamplePoint, changeMethod, changeSamplePoint } from './points.ts';
import { listMethods, listSamplePoints } from './points-repo.ts';
import { changeProfile } from './profiles.ts';
import { listProfiles } from './profiles-repo.ts';
import { listSamples } from './repo.ts';

export const sampleRoutes = (context: Context) =>
  routesOf(context, samples, {
    'samplePoints.list': async ({ row }) => ({ rows: toWire(await listSamplePoints(context.db, row.id)) }),
    'samplePoints.add': ({ actor, origin, row, body }) =>
      addSamplePoint(context, { actor, origin }, row, body),
    'samplePoints.change': ({ actor, origin, row, body }) =>
      changeSamplePoint(context, { actor, origin }, row, body),
    'methods.list': async ({ row }) => ({ rows: toWire(await listMethods(context.db, row.id)) }),
    'methods.add': ({ actor, origin, row, body }) => addMethod(context, { actor, origin }, row, body),
    'methods.change': ({ actor, origin, row, body }) => changeMethod(context, { actor, origin }, row, body),
    'samples.list': async ({ row, query }) => toWire(await listSamples(context.db, row.id, query)),
    'sampleImports.list': async ({ row }) => ({ rows: toWire(await listImports(context.db, row.id)) }),
    'sampleImports.upload': ({ actor, origin, row, upload }) =>
      addUpload(context, { actor, origin }, row, upload),
    'sampleImports.get': ({ row }) => viewImport(context.db, row, context.clock()),
    'sampleImports.dryRun': ({ actor, origin, row, body }) =>
      sayMapping(context, { actor, origin }, row, body),
    'sampleImports.mend': ({ actor, origin, row, body }) => mendRows(context, { actor, origin }, row, body),
    'importProfiles.list': async ({ row }) => ({ rows: toWire(await listProfiles(context.db, row.id)) }),
    'importProfiles.change': ({ actor, origin, row, body }) =>
      changeProfile(context, { actor, origin }, row, body),
    'sampleImports.commit': ({ actor, origin, row, body }) =>
      commitImport(context, { actor, origin }, row, body),
    'sampleImports.undo': ({ actor, origin, row }) => undoImport(context, { actor, origin }, row),
    'sampleImports.refused': ({ row }) => refusedRows(context, row),
  });
