import request from 'supertest';
import { makeLink } from '../../server/features/people/sign-in.ts';
import { persons } from '../../server/db/schema/index.ts';
import type { EndpointName } from '../../shared/contracts/index.ts';
import { noColumns } from '../../shared/rules/sample-mapping.ts';
import { sheetFields } from './sheet-fields.ts';
import { addSiteRows, type SiteRows } from './site-rows.ts';
import { type Agent, origin, password, type TestServer } from './server.ts';

/** What a change is made with: rows of a site, and one person for each role. */
export interface Scene extends SiteRows {
  server: TestServer;
  administrator: Agent;
  engineer: Agent;
  technician: Agent;
  manager: Agent;
}

export async function makeScene(server: TestServer): Promise<Scene> {
  const [someone] = await server.context.db
    .insert(persons)
    .values({ name: 'Somebody Else', email: 'somebody.else@cupel.example' })
    .returning();
  const rows = await addSiteRows(server.context.db, 'Tarnby', someone!.id);
  const at = (role: 'engineer' | 'technician' | 'manager') =>
    server.signedIn({ name: `The ${role}`, roles: [{ siteId: rows.siteId, role }] });
  return {
    ...rows,
    server,
    administrator: await server.signedIn({ name: 'The administrator', administrator: true }),
    engineer: await at('engineer'),
    technician: await at('technician'),
    manager: await at('manager'),
  };
}

type Send = (scene: Scene, found: string) => request.Test;

const v1 = (path: string) => `/api/v1${path}`;
const nobody = (scene: Scene) => request(scene.server.app);
const now = { archived: false, version: 1 };
const external = { form: 'external', holdLimitMs: 600_000, residualSd: null };
const csv = { delimiter: ',', decimal: '.', headerLine: 1, dateOrder: 'iso', zone: 'UTC' };
const layout = { ...csv, shape: 'wide', timeColumn: 0 };
const mapping = {
  ...csv,
  delimiter: ';',
  decimal: ',',
  unit: '°C',
  columns: { ...noColumns, sampleNumber: 0, takenAt: 1, value: 2 },
  sheet: null,
  missingWords: ['n/a'],
};
const period = { from: '2026-10-01T00:00:00Z', to: '2026-11-02T00:00:00Z' };

/** One request for every endpoint that changes something, in an order in which each can succeed. */
export const changes: Partial<Record<EndpointName, Send>> = {
  'auth.signIn': (s) =>
    nobody(s).post(v1('/session')).set('Origin', origin).send({ email: s.manager.email, password }),
  'auth.askForLink': (s) =>
    nobody(s).post(v1('/password-links')).set('Origin', origin).send({ email: s.technician.email }),
  'auth.useLink': (s, token) => s.technician.post(v1('/password-links/use')).send({ token, password }),
  'people.add': (s) =>
    s.administrator
      .post(v1('/people'))
      .send({ name: 'New Person', email: 'new@cupel.example', administrator: false, roles: [] }),
  'people.change': (s) =>
    s.administrator.put(v1(`/people/${s.technician.personId}`)).send({
      name: 'Renamed',
      email: s.technician.email,
      administrator: false,
      roles: [{ siteId: s.siteId, role: 'technician' }],
      deactivated: false,
      version: 1,
    }),
  'people.sendLink': (s) =>
    s.administrator.post(v1(`/people/${s.technician.personId}/password-links`)).send({}),
  'sites.add': (s) => s.administrator.post(v1('/sites')).send({ name: 'New Works', zone: 'UTC' }),
  'sites.change': (s) =>
    s.administrator
      .put(v1(`/sites/${s.siteId}`))
      .send({ name: 'Tarnby Works', zone: 'UTC', shifts: [{ name: 'Day', from: '06:00' }], ...now }),
  'areas.add': (s) => s.engineer.post(v1(`/sites/${s.siteId}/areas`)).send({ name: 'New area' }),
  'areas.change': (s) => s.engineer.put(v1(`/areas/${s.areaId}`)).send({ name: 'Hot end', ...now }),
  'units.add': (s) =>
    s.engineer.post(v1(`/sites/${s.siteId}/units`)).send({ name: 'Kiln', areaId: s.areaId }),
  'units.change': (s) =>
    s.engineer.put(v1(`/units/${s.unitId}`)).send({ name: 'Furnace 1', areaId: s.areaId, ...now }),
  'tags.add': (s) => s.engineer.post(v1(`/sites/${s.siteId}/tags`)).send({ tags: [tag('TI-9')] }),
  'tags.change': (s) => s.engineer.put(v1(`/tags/${s.tagId}`)).send({ ...tag('TI-10'), ...now }),
  'tags.removeReadings': (s) =>
    s.engineer.post(v1(`/tags/${s.tagId}/removals`)).send({ ...period, reason: 'Trial' }),
  'runs.cancel': (s) => s.engineer.post(v1(`/runs/${s.runId}/cancel`)).send({}),
  'register.add': (s) =>
    s.engineer.post(v1(`/sites/${s.siteId}/soft-sensors`)).send(sheetFields({ unitId: s.unitId })),
  'register.change': (s, ownerId) =>
    s.engineer.put(v1(`/soft-sensors/${s.softSensorId}`)).send({
      fields: sheetFields({
        unitId: s.unitId,
        samplePointId: s.samplePointId,
        tagName: 'TY-9',
        unit: '°C',
        ownerId: Number(ownerId),
      }),
      version: 1,
    }),
  'drafts.fit': (s) =>
    s.engineer.post(v1(`/soft-sensors/${s.softSensorId}/draft/fit`)).send({ ...period, version: 1 }),
  'drafts.save': (s) =>
    s.engineer.put(v1(`/soft-sensors/${s.softSensorId}/draft`)).send({ model: external, version: 1 }),
  'revisions.withdraw': (s) => s.engineer.post(v1(`/revisions/${s.revisionId}/withdrawal`)).send({}),
  'revisions.propose': (s) =>
    s.engineer
      .post(v1(`/soft-sensors/${s.softSensorId}/revisions`))
      .send({ version: 2, reason: 'Arrives from the control system', changeReference: '' }),
  'revisions.decide': (s, id) =>
    s.manager.post(v1(`/revisions/${id}/decision`)).send({ decision: 'approved', reason: '' }),
  'life.suspend': (s) =>
    s.technician.post(v1(`/soft-sensors/${s.softSensorId}/suspension`)).send({ reason: '' }),
  'life.reason': (s) =>
    s.technician.put(v1(`/soft-sensors/${s.softSensorId}/suspension`)).send({ reason: 'Probe blocked' }),
  'life.putBack': (s) => s.manager.delete(v1(`/soft-sensors/${s.softSensorId}/suspension`)),
  'calibrations.withdraw': (s) => s.engineer.delete(v1(`/calibrations/${s.calibrationId}`)),
  'calibrations.propose': (s, seen) =>
    s.engineer
      .post(v1(`/soft-sensors/${s.softSensorId}/calibrations`))
      .send({ kind: 'bias', reason: 'Reads high', seen: JSON.parse(seen) }),
  'calibrations.decide': (s, found) => {
    const [id, ownerId] = found.split(' ');
    const body = { decision: 'approved', reason: '', ownerId: Number(ownerId) || null, effectiveFrom: null };
    return s.manager.post(v1(`/calibrations/${id}/decision`)).send(body);
  },
  'calibrations.enter': (s, found) => {
    const [id] = found.split(' ');
    const enteredAt = new Date().toISOString();
    return s.engineer.post(v1(`/calibrations/${id}/entry`)).send({ enteredBy: 'Shift C', enteredAt });
  },
  'calibrations.confirm': (s) =>
    s.engineer.post(v1('/confirmations')).send({ softSensorIds: [s.softSensorId] }),
  'events.withdraw': (s) =>
    s.technician.post(v1(`/events/${s.eventId}/withdrawal`)).send({ reason: 'The wrong unit' }),
  'events.add': (s) =>
    s.technician
      .post(v1(`/sites/${s.siteId}/events`))
      .send({ unitId: s.unitId, kind: 'grade-change', at: '2026-11-01T06:10:00Z', note: 'Clear glass' }),
  'events.upload': (s, found) => {
    const [outcome, unit] = found.split('|');
    return sendEvents(s, unit!).query({ outcome });
  },
  'duties.reassign': (s, found) => {
    const [id, version] = found.split(' ');
    const body = { personId: s.engineer.personId, reason: '', version: Number(version) };
    return s.manager.post(v1(`/duties/${id}/assignee`)).send(body);
  },
  'duties.waive': (s, found) => {
    const [id, version] = found.split(' ');
    const dueOn = new Date(Date.now() + 30 * 86_400_000).toISOString().slice(0, 10);
    const body = { reason: 'Shut down until then', dueOn, version: Number(version) };
    return s.manager.post(v1(`/duties/${id}/waiver`)).send(body);
  },
  'reviews.add': (s) => {
    const answers = { purpose: true, consumers: true, inputs: true, validity: true, owner: true };
    return s.engineer
      .post(v1(`/soft-sensors/${s.softSensorId}/reviews`))
      .send({ conclusion: 'keep', answers, note: '' });
  },
  'handovers.withdraw': (s) => s.manager.delete(v1(`/handovers/${s.handoverId}`)),
  'handovers.propose': (s) =>
    s.manager
      .post(v1(`/soft-sensors/${s.softSensorId}/handovers`))
      .send({ part: 'owner', toId: s.engineer.personId, reason: 'Looks after the furnace now' }),
  'handovers.answer': (s, id) =>
    s.engineer.post(v1(`/handovers/${id}/answer`)).send({ answer: 'accepted', reason: '' }),
  'replays.start': (s) =>
    s.engineer
      .post(v1(`/soft-sensors/${s.softSensorId}/replays`))
      .send({ ...period, judgedFrom: period.from, updateFactor: 0.2, model: 'in-force' }),
  'samplePoints.add': (s) =>
    s.technician.post(v1(`/sites/${s.siteId}/sample-points`)).send({ name: 'KX-1', unitId: null }),
  'samplePoints.change': (s) =>
    s.technician.put(v1(`/sample-points/${s.samplePointId}`)).send({ name: 'KX-2', unitId: null, ...now }),
  'methods.add': (s) => s.technician.post(v1(`/sites/${s.siteId}/methods`)).send(method('Pyrometry')),
  'methods.change': (s) =>
    s.technician.put(v1(`/methods/${s.methodId}`)).send({ ...method('Titration'), ...now }),
  'checkStandards.add': (s) =>
    s.technician
      .post(v1(`/methods/${s.methodId}/check-standards`))
      .send({ name: 'Gold point', acceptedValue: '1064,2' }),
  'checkStandards.change': (s) =>
    s.technician
      .put(v1(`/check-standards/${s.checkStandardId}`))
      .send({ name: 'Reference glass', acceptedValue: '300.5', ...now }),
  'checkResults.add': (s) =>
    s.technician
      .post(v1(`/check-standards/${s.checkStandardId}/results`))
      .send({ values: '300,2; 301', measuredAt: '2026-11-01T08:00:00Z' }),
  'checkResults.withdraw': (s) =>
    s.technician.post(v1(`/check-results/${s.checkResultId}/withdraw`)).send({ reason: 'The wrong cell' }),
  'retests.ask': (s) =>
    s.engineer.post(v1(`/samples/${s.sampleId}/retest`)).send({ reason: 'Far from the last results' }),
  'retests.answer': (s) =>
    s.technician
      .post(v1(`/samples/${s.sampleId}/retest/answer`))
      .send({ answer: 'no-bottle', then: 'hold', note: '' }),
  'samples.release': (s) =>
    s.engineer
      .post(v1(`/samples/${s.sampleId}/release`))
      .send({ reason: 'The next result agrees', version: 1 }),
  'samples.correct': (s) =>
    s.technician
      .post(v1(`/samples/${s.sampleId}/correct`))
      .send({ value: '302,5', reason: 'Typed wrongly', version: 1 }),
  'samples.withdraw': (s, id) =>
    s.technician.post(v1(`/samples/${id}/withdraw`)).send({ reason: 'The wrong bottle', version: 2 }),
  'sampleImports.upload': (s) =>
    s.technician
      .post(v1(`/sites/${s.siteId}/sample-imports`))
      .attach('file', Buffer.from('sample;taken;value\r\nS-1;2026-11-01T06:30:00Z;301,5\r\n'), 'lab.csv'),
  'sampleImports.dryRun': (s, id) =>
    s.technician
      .put(v1(`/sample-imports/${id}/mapping`))
      .send({ mapping: { ...mapping, samplePointId: s.samplePointId, methodId: null }, version: 1 }),
  'sampleImports.mend': (s, id) =>
    s.technician
      .put(v1(`/sample-imports/${id}/mends`))
      .send({ mends: { 2: { value: '302,5' } }, version: 2 }),
  'sampleImports.commit': (s, found) => {
    const [id, outcome] = found.split(' ');
    return s.technician.post(v1(`/sample-imports/${id}/commit`)).send({ version: 3, outcome });
  },
  'sampleImports.undo': (s, id) => s.technician.post(v1(`/sample-imports/${id}/undo`)).send({}),
  'importProfiles.change': (s) =>
    s.technician
      .put(v1(`/import-profiles/${s.importProfileId}`))
      .send({ name: 'Furnace balance', archived: false, version: 1 }),
  'sampling.enter': (s) =>
    s.technician.post(v1(`/sites/${s.siteId}/samples`)).send({
      entryKey: '0b6f0f0e-6f3c-4d53-9d0e-0c1f6a3f8a11',
      samplePointId: s.samplePointId,
      methodId: s.methodId,
      sampleNumber: '',
      takenAt: '2026-11-01T06:40:00.000Z',
      value: '301,5',
      unit: '°C',
      note: 'By hand',
    }),
  'sampling.notTaken': (s) =>
    s.technician.post(v1(`/sites/${s.siteId}/not-taken`)).send({
      entryKey: '0b6f0f0e-6f3c-4d53-9d0e-0c1f6a3f8a12',
      samplePointId: s.samplePointId,
      askedFor: '2026-11-01T10:00:00.000Z',
      reason: 'no-safe-access',
      note: '',
    }),
  'sampling.ask': (s) =>
    s.engineer.post(v1(`/soft-sensors/${s.softSensorId}/sample-requests`)).send({
      count: 5,
      fromAt: new Date().toISOString(),
      untilAt: new Date(Date.now() + 3 * 86_400_000).toISOString(),
      reason: 'Reads high',
    }),
  'sampling.withdraw': (s) =>
    s.engineer.post(v1(`/sample-requests/${s.sampleRequestId}/withdraw`)).send({ version: 1 }),
  'history.upload': (s) =>
    s.engineer
      .post(v1(`/sites/${s.siteId}/history-imports`))
      .attach('file', Buffer.from('time,TI-10\r\n2026-11-01T06:30:00Z,301.5\r\n'), 'history.csv'),
  'history.start': (s, id) =>
    s.engineer.post(v1(`/history-imports/${id}/start`)).send({
      layout: { ...layout, columns: [{ column: 1, tagId: s.tagId }] },
      replaceExisting: false,
    }),
  'history.resume': (s, id) => s.engineer.post(v1(`/history-imports/${id}/resume`)).send({}),
  'auth.signOut': (s) => s.manager.delete(v1('/session')),
};

/** What some of them need to find out first. */
export const findings: Partial<Record<EndpointName, (scene: Scene) => Promise<string>>> = {
  async 'auth.useLink'(s) {
    const { context } = s.server;
    const link = await makeLink(context, context.db, 'reset-password', s.technician.personId);
    return link.split('#')[1]!;
  },
  async 'register.change'(s) {
    const { body } = await s.engineer.get(v1(`/soft-sensors/${s.softSensorId}`));
    return String(body.fields.ownerId);
  },
  async 'events.upload'(s) {
    const { body } = await s.engineer.get(v1(`/sites/${s.siteId}/units`));
    const unit = body.rows[0].name;
    return `${(await sendEvents(s, unit)).body.outcome}|${unit}`;
  },
  'duties.reassign': openReview,
  'duties.waive': openReview,
  async 'handovers.answer'(s) {
    const { body } = await s.engineer.get(v1('/handovers'));
    return String(body.toAnswer[0].id);
  },
  async 'revisions.decide'(s) {
    const { body } = await s.engineer.get(v1(`/soft-sensors/${s.softSensorId}/revisions`));
    return String(body.rows[0].id);
  },
  async 'calibrations.propose'(s) {
    await addPairedSamples(s);
    const { body } = await s.engineer.get(v1(`/soft-sensors/${s.softSensorId}/recalibration`));
    return JSON.stringify({ used: body.evidence?.used, to: body.evidence?.to });
  },
  'calibrations.decide': newestCalibration,
  'calibrations.enter': newestCalibration,
  async 'calibrations.confirm'(s) {
    const { pool } = s.server.context;
    await pool.query(`update soft_sensor_status set health = 'fit', in_service = true, references_since = 20
      where soft_sensor_id = ${s.softSensorId}`);
    await addPairedSamples(s);
    return '';
  },
  async 'samples.withdraw'(s) {
    const { body } = await s.engineer.get(v1(`/samples/${s.sampleId}/history`));
    return String(body.currentId);
  },
  'sampleImports.dryRun': (s) => newest(s, 'sample-imports'),
  'sampleImports.mend': (s) => newest(s, 'sample-imports'),
  async 'sampleImports.commit'(s) {
    const id = await newest(s, 'sample-imports');
    const { body } = await s.engineer.get(v1(`/sample-imports/${id}`));
    return `${id} ${body.outcome}`;
  },
  'sampleImports.undo': (s) => newest(s, 'sample-imports'),
  'history.start': (s) => newest(s, 'history-imports'),
  async 'history.resume'(s) {
    const id = await newest(s, 'history-imports');
    const { pool } = s.server.context;
    await pool.query(`update history_imports set state = 'cancelled', finished_at = now() where id = $1`, [
      id,
    ]);
    await pool.query(`update runs set state = 'cancelled', finished_at = now() where state = 'waiting'`);
    return id;
  },
};

/** Twenty counted pairs of an estimate that reads 2 high, taken now: after whatever restarts its errors. */
async function addPairedSamples(s: Scene): Promise<void> {
  await s.server.context.pool.query(`
    with taken as (
      insert into samples (site_id, sample_point_id, sample_number, taken_at, reported_at, value, unit, as_written, entered_by, entered_at)
      select ${s.siteId}, ${s.samplePointId}, 'P-' || i || '-' || clock_timestamp(), now(), now(), 300, '°C', '300',
        ${s.engineer.personId}, now() from generate_series(1, 20) i returning *)
    insert into pairs (site_id, soft_sensor_id, sample_id, taken_at, reported_at, reference, estimate, error, origin, computed_at)
    select site_id, ${s.softSensorId}, id, taken_at, reported_at, 300, 302 + sin(id), 2 + sin(id), 'recorded', now() from taken`);
}

async function openReview(s: Scene): Promise<string> {
  const { body } = await s.manager.get(v1('/duties')).query({ whose: 'sites', kind: 'review' });
  return `${body.rows[0].id} ${body.rows[0].version}`;
}

async function newestCalibration(s: Scene): Promise<string> {
  const { body } = await s.engineer.get(v1(`/soft-sensors/${s.softSensorId}/calibrations`));
  const sheet = await s.engineer.get(v1(`/soft-sensors/${s.softSensorId}`));
  return `${body.rows[0].id} ${sheet.body.fields.ownerId}`;
}

const sendEvents = (s: Scene, unit: string) =>
  s.technician
    .post(v1(`/sites/${s.siteId}/event-files`))
    .attach(
      'file',
      Buffer.from(`unit,event,time\r\n${unit},method change,2026-11-01 09:00\r\n`),
      'shift.csv',
    );

const newest = async (s: Scene, list: string): Promise<string> =>
  String((await s.engineer.get(v1(`/sites/${s.siteId}/${list}`))).body.rows[0].id);

function tag(name: string) {
  return { name, description: '', unit: '°C', unitId: null, rangeLow: null, rangeHigh: null };
}

function method(name: string) {
  return { name, quantity: '', unit: '°C', repeatability: null, reproducibility: null };
}
