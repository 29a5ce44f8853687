import { beforeAll, describe, expect, it } from 'vitest';
import type { MethodPrecision } from '../../shared/contracts/precision.ts';
import e691 from '../reference/values/e691-glucose.json';
import { problemOf } from '../support/laboratory.ts';
import { type Agent, useServer } from '../support/server.ts';
import { makeStanding, type Standing, v1 } from '../support/standing-samples.ts';

const server = useServer();
let { lab, other, sql } = {} as Standing;
let technician: Agent;

beforeAll(async () => {
  ({ lab, other, sql } = await makeStanding(server));
  technician = lab.technician;
});

const fieldsOf = (answer: { body: unknown }) => problemOf(answer).fields;
const precision = async (methodId: number): Promise<MethodPrecision> =>
  (await technician.get(v1(`/methods/${methodId}/precision`)).expect(200)).body as MethodPrecision;
const addMethod = async (name: string) =>
  (
    await technician
      .post(v1(`/sites/${lab.siteId}/methods`))
      .send({ name, quantity: '', unit: 'mg/dL', repeatability: null, reproducibility: null })
      .expect(200)
  ).body.id as number;
const addStandard = async (methodId: number, name: string, acceptedValue: string) =>
  (
    await technician
      .post(v1(`/methods/${methodId}/check-standards`))
      .send({ name, acceptedValue })
      .expect(200)
  ).body.id as number;
const addSeries = (standardId: number, values: string, measuredAt = '2026-11-01T08:00:00Z') =>
  technician.post(v1(`/check-standards/${standardId}/results`)).send({ values, measuredAt, analyst: 'TH' });

describe('the precision of a site’s own laboratory', () => {
  let methodId: number;

  beforeAll(async () => {
    methodId = await addMethod('Glucose');
  });

  it('is not known at first, and says what it takes', async () => {
    expect(await precision(methodId)).toMatchObject({
      replicates: { samples: 0, figure: { ok: false, reason: 'too-few-repeats', got: 0, needed: 6 } },
      standards: [],
      offers: { r: null, R: null },
    });
  });

  /** Source: ASTM E691-99 table 1, glucose in serum, material C; its laboratories stand for series of one. */
  it('comes out as E691 prints it, from series typed with decimal commas', async () => {
    const standardId = await addStandard(methodId, 'Serum C', '134,5');
    for (const row of Object.values(e691.inputs.data.C)) {
      await addSeries(standardId, row.map((value) => String(value).replace('.', ',')).join('\n')).expect(200);
    }
    const [found] = (await precision(methodId)).standards;
    const { s_r, s_R, mean } = e691.expected.materials.C;
    if (!found?.repeatability.ok || !found.sitePrecision.ok || !found.bias.ok) throw new Error('no figure');
    expect(found).toMatchObject({ series: 8, results: 24, outOfControl: null });
    expect(found.repeatability.sd).toBeCloseTo(s_r, 9);
    expect(found.repeatability.degreesOfFreedom).toBe(16);
    expect(found.sitePrecision.sd).toBeCloseTo(s_R, 9);
    expect(found.bias.mean).toBeCloseTo(mean, 9);
    expect(found.bias.bias).toBeCloseTo(mean - 134.5, 9);
  });

  it('is offered as r and R to two figures, and taken over by a change of the method', async () => {
    const { offers, version } = await precision(methodId);
    const { s_r, s_R } = e691.expected.materials.C;
    const factor = 1.96 * Math.SQRT2;
    expect(offers).toEqual({
      r: Number((factor * s_r).toPrecision(2)),
      R: Number((factor * s_R).toPrecision(2)),
    });
    const change = { name: 'Glucose', quantity: '', unit: 'mg/dL', archived: false, version };
    await technician
      .put(v1(`/methods/${methodId}`))
      .send({ ...change, repeatability: offers.r, reproducibility: offers.R })
      .expect(200);
    expect(await precision(methodId)).toMatchObject({ repeatability: offers.r, reproducibility: offers.R });
  });

  it('from replicates of samples pools all that stand and are not held', async () => {
    const samples = async (replicates: number[], count: number, held = false, method = methodId) =>
      sql(
        `insert into samples (site_id, sample_point_id, method_id, sample_number, taken_at, reported_at, value, unit, as_written,
           replicates, held_since, entered_by, entered_at)
         select $1, $2, $3, 'R-' || $8 || i, now(), now(), 10, 'mg/dL', '10', $4, $5, $6, now() from generate_series(1, $7::int) i`,
        [
          lab.siteId,
          lab.samplePointId,
          method,
          replicates,
          held ? new Date() : null,
          technician.personId,
          count,
          replicates.join('-'),
        ],
      );
    const own = await addMethod('Own repeats');
    await samples([9, 11], 5, false, own);
    expect((await precision(own)).replicates.figure).toMatchObject({ ok: false, got: 5 });
    await samples([9, 10, 11], 1, false, own);
    await samples([0, 100], 9, true, own);
    const { replicates } = await precision(own);
    // By hand: five pairs apart by 2 (sum of squares 2 each) and one triple 9, 10, 11 (2): 12 over 7.
    expect(replicates.samples).toBe(6);
    expect(replicates.figure).toMatchObject({
      ok: true,
      degreesOfFreedom: 7,
      sd: expect.closeTo(Math.sqrt(12 / 7), 9),
    });
  });

  it('leaves out what was withdrawn and what is archived', async () => {
    const standardId = await addStandard(methodId, 'Serum D', '1');
    const { body } = await addSeries(standardId, '5; 6').expect(200);
    await technician
      .post(v1(`/check-results/${body.id}/withdraw`))
      .send({ reason: 'The wrong vial' })
      .expect(200);
    const find = async () => (await precision(methodId)).standards.find(({ name }) => name === 'Serum D');
    expect(await find()).toMatchObject({ series: 0, results: 0 });
    const listed = await technician.get(v1(`/methods/${methodId}/check-standards`)).expect(200);
    const kept = listed.body.rows.find(({ id }: { id: number }) => id === standardId);
    expect(kept.results[0]).toMatchObject({ values: [5, 6], withdrawnReason: 'The wrong vial' });
    await technician
      .put(v1(`/check-standards/${standardId}`))
      .send({ name: 'Serum D', acceptedValue: '1', archived: true, version: 1 })
      .expect(200);
    expect(await find()).toBeUndefined();
    const refused = await addSeries(standardId, '5').expect(409);
    expect(problemOf(refused).detail).toBe('Serum D is archived. Take it back before adding results.');
  });

  it('says when the newest mean lies outside the limits of those before it', async () => {
    const standardId = await addStandard(methodId, 'Serum E', '10');
    for (let day = 1; day <= 16; day++) {
      const at = `2026-10-${String(day).padStart(2, '0')}T08:00:00Z`;
      await addSeries(standardId, day % 2 ? '10,1' : '9,9', at).expect(200);
    }
    const find = async () => (await precision(methodId)).standards.find(({ name }) => name === 'Serum E')!;
    expect((await find()).outOfControl).toBeNull();
    await addSeries(standardId, '12,4', '2026-10-20T08:00:00Z').expect(200);
    // By hand: mean 10, mean moving range 0.2, limits 10 ± 3 · 0.2/1.128.
    const { outOfControl } = await find();
    expect(outOfControl).toMatchObject({ measuredAt: '2026-10-20T08:00:00.000Z', mean: 12.4 });
    expect(outOfControl!.high).toBeCloseTo(10 + (3 * 0.2) / 1.128, 2);
  });
});

describe('check standards', () => {
  it('say beside the field what is wrong', async () => {
    const twice = await technician
      .post(v1(`/methods/${lab.methodId}/check-standards`))
      .send({ name: 'TARNBY', acceptedValue: '1' })
      .expect(400);
    expect(fieldsOf(twice)![0]!.path).toBe('name');
    const number = await technician
      .post(v1(`/methods/${lab.methodId}/check-standards`))
      .send({ name: 'New', acceptedValue: 'about 5' })
      .expect(400);
    expect(fieldsOf(number)).toEqual([
      { path: 'acceptedValue', message: '“about 5” is no number. One looks like 12.5 or 12,5.' },
    ]);
    const series = async (values: string, at?: string) =>
      fieldsOf(await addSeries(lab.checkStandardId, values, at).expect(400))![0];
    expect(await series('5,4 5,5')).toEqual({
      path: 'values',
      message: 'Write each result on a line of its own, or part them with semicolons.',
    });
    expect((await series('<5'))!.message).toBe('Write a number without < or >.');
    expect((await series('5', '2999-01-01T00:00:00Z'))!.path).toBe('measuredAt');
  });

  it('are not changed on an old version, nor a series withdrawn twice', async () => {
    const body = { name: 'Tarnby', acceptedValue: '300', archived: false, version: 9 };
    const answer = await technician
      .put(v1(`/check-standards/${lab.checkStandardId}`))
      .send(body)
      .expect(409);
    expect(problemOf(answer).current).toMatchObject({ name: 'Tarnby', version: 1 });
    const withdraw = () =>
      technician.post(v1(`/check-results/${lab.checkResultId}/withdraw`)).send({ reason: 'The wrong cell' });
    await withdraw().expect(200);
    await withdraw().expect(409);
  });

  it('are those of the own site only', async () => {
    await technician.get(v1(`/methods/${other.methodId}/precision`)).expect(404);
    await technician.get(v1(`/methods/${other.methodId}/check-standards`)).expect(404);
    await addSeries(other.checkStandardId, '5').expect(404);
  });
});

describe('names that files bring and the site does not know', () => {
  it('are gathered over the files, and say which point goes by them since', async () => {
    await sql(
      `update sample_imports set state = 'committed', committed_at = now(), unknown_points = '{"KX-9": 8, "KX-77": 1}' where id = $1`,
      [lab.sampleImportId],
    );
    await sql(
      `insert into sample_imports (site_id, file_id, file_name, sha256, state, committed_at, unknown_points, created_by, created_at)
       select site_id, file_id, 'week-49.csv', 'other', 'committed', now(), '{"kx-9": 4}', created_by, now() from sample_imports where id = $1`,
      [lab.sampleImportId],
    );
    const unknown = async () =>
      (await technician.get(v1(`/sites/${lab.siteId}/unknown-sample-points`)).expect(200)).body.rows;
    expect(await unknown()).toEqual([
      {
        name: 'KX-9',
        rows: 12,
        isNow: null,
        files: [
          { importId: lab.sampleImportId, fileName: 'Tarnby', rows: 8 },
          { importId: expect.any(Number), fileName: 'week-49.csv', rows: 4 },
        ],
      },
      expect.objectContaining({ name: 'KX-77', rows: 1 }),
    ]);
    const body = { name: 'Tarnby', unitId: lab.unitId, aliases: ['kx-9'], archived: false, version: 1 };
    await technician
      .put(v1(`/sample-points/${lab.samplePointId}`))
      .send(body)
      .expect(200);
    expect((await unknown())[0].isNow).toEqual({ id: lab.samplePointId, name: 'Tarnby' });
  });
});
