import { beforeAll, describe, expect, it } from 'vitest';
import { persons } from '../../server/db/schema/index.ts';
import { sheetFields } from '../support/sheet-fields.ts';
import { addSiteRows, type SiteRows } from '../support/site-rows.ts';
import { type Agent, useServer } from '../support/server.ts';
import { noColumns } from '../../shared/rules/sample-mapping.ts';

const server = useServer();
let own: SiteRows;
let foreign: SiteRows;
let foreignPersonId: number;
let engineer: Agent;
let administrator: Agent;

beforeAll(async () => {
  const [someone] = await server.context.db
    .insert(persons)
    .values({ name: 'Somebody Else', email: 'somebody.else@cupel.example' })
    .returning();
  own = await addSiteRows(server.context.db, 'Tarnby', someone!.id);
  foreign = await addSiteRows(server.context.db, 'Kallara', someone!.id);
  engineer = await server.signedIn({ roles: [{ siteId: own.siteId, role: 'engineer' }] });
  administrator = await server.signedIn({ administrator: true });
  const elsewhere = await server.signedIn({ roles: [{ siteId: foreign.siteId, role: 'manager' }] });
  foreignPersonId = elsewhere.personId;
});

const tag = { name: 'TI-1', description: '', unit: '°C', unitId: null, rangeLow: null, rangeHigh: null };
const now = { archived: false, version: 1 };
const method = { name: 'M', quantity: '', unit: '°C', repeatability: null, reproducibility: null };
const layout = {
  shape: 'wide',
  delimiter: ',',
  decimal: '.',
  headerLine: 1,
  timeColumn: 0,
  dateOrder: 'iso',
  zone: 'UTC',
};
const mapping = {
  delimiter: ',',
  decimal: '.',
  headerLine: 1,
  dateOrder: 'iso',
  zone: 'UTC',
  unit: '°C',
  columns: { ...noColumns, takenAt: 0, value: 1 },
  sheet: null,
  missingWords: [],
};

const entryKey = '0b6f0f0e-6f3c-4d53-9d0e-0c1f6a3f8a11';
const takenAt = '2026-11-01T06:00:00Z';
const entry = { entryKey, sampleNumber: '', takenAt, value: '301', unit: '°C', note: '' };
const missed = { entryKey, askedFor: takenAt, reason: 'bottle-lost', note: '' };

type Try = [method: 'post' | 'put', path: string, body: object, field: string];

/** Every body that names another row, each time with one of the other site. */
function tries(): Try[] {
  const site = `/sites/${own.siteId}`;
  const sensor = `/soft-sensors/${own.softSensorId}`;
  const sheet = (fields: Parameters<typeof sheetFields>[0], field: string): Try[] => [
    ['post', `${site}/soft-sensors`, sheetFields(fields), field],
    ['put', sensor, { fields: sheetFields(fields), version: 1 }, field],
  ];
  const terms = [{ tagId: foreign.tagId, coefficient: 1 }];
  const model = {
    form: 'regression',
    stepMs: 60_000,
    holdLimitMs: 60_000,
    intercept: 0,
    terms,
    residualSd: null,
  };
  const file = { samplePointId: own.samplePointId, methodId: own.methodId };
  const { unitId } = own;
  return [
    ['post', `${site}/units`, { name: 'U', areaId: foreign.areaId }, 'areaId'],
    ['put', `/units/${unitId}`, { name: 'U', areaId: foreign.areaId, ...now }, 'areaId'],
    ['post', `${site}/tags`, { tags: [tag, { ...tag, name: 'TI-2', unitId: foreign.unitId }] }, 'unitId'],
    ['put', `/tags/${own.tagId}`, { ...tag, unitId: foreign.unitId, ...now }, 'unitId'],
    ['post', `${site}/sample-points`, { name: 'P', unitId: foreign.unitId }, 'unitId'],
    ['put', `/sample-points/${own.samplePointId}`, { name: 'P', unitId: foreign.unitId, ...now }, 'unitId'],
    ...sheet({ unitId: foreign.unitId }, 'unitId'),
    ...sheet({ unitId, samplePointId: foreign.samplePointId }, 'samplePointId'),
    ...sheet({ unitId, methodId: foreign.methodId }, 'methodId'),
    ...sheet({ unitId, ownerId: foreignPersonId }, 'ownerId'),
    ...sheet({ unitId, approverId: foreignPersonId }, 'approverId'),
    ...(['unitId', 'softSensorId'] as const).map((field): Try => {
      const body = { kind: 'stop', at: '2026-11-01T06:00:00Z', [field]: foreign[field] };
      return ['post', `${site}/events`, body, field];
    }),
    ...(['samplePointId', 'methodId'] as const).map((field): Try => {
      const body = { [field]: foreign[field], reason: 'Moved', version: 1 };
      return ['post', `/samples/${own.sampleId}/correct`, body, field];
    }),
    ...(['samplePointId', 'methodId'] as const).map((field): Try => {
      const body = { ...entry, samplePointId: own.samplePointId, methodId: null, [field]: foreign[field] };
      return ['post', `${site}/samples`, body, field];
    }),
    ['post', `${site}/not-taken`, { ...missed, samplePointId: foreign.samplePointId }, 'samplePointId'],
    ['put', `${sensor}/draft`, { model, version: 1 }, 'tagId'],
    [
      'post',
      `/history-imports/${own.historyImportId}/start`,
      { layout: { ...layout, columns: [{ column: 1, tagId: foreign.tagId }] }, replaceExisting: false },
      'tagId',
    ],
    ...(['samplePointId', 'methodId'] as const).map((field): Try => {
      const body = { mapping: { ...mapping, ...file, [field]: foreign[field] }, version: 1 };
      return ['put', `/sample-imports/${own.sampleImportId}/mapping`, body, field];
    }),
  ];
}

describe('ids of another site in a body', () => {
  it('are refused beside their field', async () => {
    const outcome: unknown[] = [];
    for (const [verb, path, body, field] of tries()) {
      const answer = await engineer[verb](`/api/v1${path}`).send(body);
      const fields = ((answer.body.fields ?? []) as { path: string }[]).map(({ path }) =>
        path.split('.').at(-1),
      );
      if (answer.status !== 400 || fields.join() !== field)
        outcome.push({ path, status: answer.status, fields });
      expect(answer.text).not.toContain('Kallara');
    }
    expect(outcome).toEqual([]);
  });

  it('leave nothing behind', async () => {
    const { body } = await engineer.get(`/api/v1/sites/${own.siteId}/tags`).expect(200);
    expect(body.rows.map((row: { name: string }) => row.name).sort()).toEqual(['Tarnby TI', 'Tarnby TY']);
    const sensors = await engineer.get('/api/v1/soft-sensors').expect(200);
    expect(sensors.body.rows).toHaveLength(1);
  });

  it('never move a row to another site, whatever else the body says', async () => {
    const stray = { siteId: foreign.siteId, id: foreign.unitId };
    const moved = await engineer
      .put(`/api/v1/units/${own.unitId}`)
      .send({ name: 'Kiln 1', areaId: own.areaId, ...now, ...stray })
      .expect(200);
    expect(moved.body).toMatchObject({ id: own.unitId, siteId: own.siteId });
    const added = await engineer
      .post(`/api/v1/sites/${own.siteId}/methods`)
      .send({ ...method, siteId: foreign.siteId })
      .expect(200);
    expect(added.body.siteId).toBe(own.siteId);
    const there = await administrator.get(`/api/v1/sites/${foreign.siteId}/units`).expect(200);
    expect(there.body.rows).toEqual([expect.objectContaining({ id: foreign.unitId, name: 'Kallara' })]);
  });

  it('narrow a list to nothing rather than across sites', async () => {
    const lists = [
      `/sites/${own.siteId}/tags?unitId=${foreign.unitId}`,
      `/sites/${own.siteId}/samples?samplePointId=${foreign.samplePointId}`,
      `/sites/${own.siteId}/samples?importId=${foreign.sampleImportId}`,
      `/sites/${own.siteId}/events?unitId=${foreign.unitId}`,
    ];
    for (const list of lists) {
      const answer = await engineer.get(`/api/v1${list}`).expect(200);
      expect(answer.body.rows).toEqual([]);
    }
  });
});

describe('the database itself', () => {
  it('has no row that points across sites, even by SQL', async () => {
    const { pool } = server.context;
    const across = [
      ['update units set area_id = $1 where id = $2', foreign.areaId, own.unitId],
      ['update tags set unit_id = $1 where id = $2', foreign.unitId, own.tagId],
      ['update sample_points set unit_id = $1 where id = $2', foreign.unitId, own.samplePointId],
      ['update soft_sensors set unit_id = $1 where id = $2', foreign.unitId, own.softSensorId],
      ['update soft_sensors set sample_point_id = $1 where id = $2', foreign.samplePointId, own.softSensorId],
      ['update replays set run_id = $1 where id = $2', foreign.runId, own.replayId],
    ] as const;
    for (const [query, ...ids] of across) {
      await expect(pool.query(query, ids)).rejects.toMatchObject({ code: '23503' });
    }
  });
});
