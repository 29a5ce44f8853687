/** Roles are held per site and are no ladder; `administrator` is for the whole company. */
export const roles = ['engineer', 'technician', 'manager', 'reader'] as const;
export type Role = (typeof roles)[number];

/** Everything a person may be allowed to do. The only matrix of who may is `shared/rules/permissions.ts`. */
export const actions = [
  'company.administer',
  'mail.read',
  'audit.read',
  'site.view',
  'site.configure',
  'history.import',
  'history.remove',
  'samples.add',
  'samples.configure',
  'samples.ask',
  'samples.judge',
  'softSensor.register',
  'softSensor.edit',
  'softSensor.replay',
  'softSensor.approve',
  'softSensor.suspend',
  'softSensor.recalibrate',
  'softSensor.nameOwner',
  'duty.attend',
  'events.record',
] as const;
export type Action = (typeof actions)[number];

/**
 * What an endpoint acts on; the front door loads that row before it asks for permission. 'sites' stands for every
 * site at which the person may do the action: such a list is filtered and never foreign.
 */
export type AccessTarget =
  | 'company'
  | 'sites'
  | 'site'
  | 'area'
  | 'unit'
  | 'tag'
  | 'method'
  | 'samplePoint'
  | 'softSensor'
  | 'revision'
  | 'calibration'
  | 'event'
  | 'duty'
  | 'handover'
  | 'replay'
  | 'sample'
  | 'sampleImport'
  | 'importProfile'
  | 'sampleRequest'
  | 'checkStandard'
  | 'checkResult'
  | 'historyImport'
  | 'run';

export type Access = 'public' | 'self' | { readonly may: Action; readonly on: AccessTarget };

/** The path parameter that names the row of each target. */
export const targetParam: Record<Exclude<AccessTarget, 'company' | 'sites'>, string> = {
  site: 'siteId',
  area: 'areaId',
  unit: 'unitId',
  tag: 'tagId',
  method: 'methodId',
  samplePoint: 'samplePointId',
  softSensor: 'softSensorId',
  revision: 'revisionId',
  calibration: 'calibrationId',
  event: 'eventId',
  duty: 'dutyId',
  handover: 'handoverId',
  replay: 'replayId',
  sample: 'sampleId',
  sampleImport: 'sampleImportId',
  importProfile: 'importProfileId',
  sampleRequest: 'sampleRequestId',
  checkStandard: 'checkStandardId',
  checkResult: 'checkResultId',
  historyImport: 'historyImportId',
  run: 'runId',
};
