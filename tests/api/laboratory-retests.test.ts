import { beforeAll, describe, expect, it } from 'vitest';
import type { Retest, SampleHistory } from '../../shared/contracts/standing-samples.ts';
import { problemOf } from '../support/laboratory.ts';
import { useServer } from '../support/server.ts';
import { makeStanding, type Standing, v1 } from '../support/standing-samples.ts';

const server = useServer();
let { lab, engineer, addSample, correct, historyOf, heldNow, sql } = {} as Standing;

beforeAll(async () => {
  ({ lab, engineer, addSample, correct, historyOf, heldNow, sql } = await makeStanding(server));
});

const fieldsOf = (answer: { body: unknown }) => problemOf(answer).fields;

describe('a held sample', () => {
  it('is listed with the re-test that is open, and counts once released', async () => {
    const id = await addSample({ held: true });
    expect((await heldNow()).find((row) => row.id === id)).toMatchObject({ retest: null });
    const asked = await engineer
      .post(v1(`/samples/${id}/retest`))
      .send({ reason: 'Do you still have the bottle?' })
      .expect(200);
    expect(asked.body).toMatchObject({ sampleId: id, askedBy: 'Marco Castellane', answer: null });
    expect((await heldNow()).find((row) => row.id === id)!.retest).toMatchObject({
      askedBy: 'Marco Castellane',
      reason: 'Do you still have the bottle?',
    });
    const { body } = await engineer
      .post(v1(`/samples/${id}/release`))
      .send({ reason: 'The feed had changed', version: 1 })
      .expect(200);
    const history = body as SampleHistory;
    expect(history.versions[0]!.heldSince).toBeNull();
    expect(history.deeds).toEqual([
      expect.objectContaining({ what: 'released', reason: 'The feed had changed' }),
    ]);
    expect(history.retests[0]).toMatchObject({
      answer: 'not-needed',
      note: 'The sample was released: The feed had changed',
    });
    expect((await heldNow()).map((row) => row.id)).not.toContain(id);
    const twice = await engineer
      .post(v1(`/samples/${id}/release`))
      .send({ reason: 'x', version: 1 })
      .expect(409);
    expect(problemOf(twice).detail).toBe('This sample is not held: it counts already.');
  });
});

describe('a re-test', () => {
  const ask = async (id: number) =>
    engineer
      .post(v1(`/samples/${id}/retest`))
      .send({ reason: 'Odd' })
      .expect(200);
  const answer = (id: number, body: object) =>
    lab.technician.post(v1(`/samples/${id}/retest/answer`)).send(body);

  it('holds the sample until it is answered, and is asked once', async () => {
    const id = await addSample();
    await ask(id);
    expect((await historyOf(id)).versions[0]!.heldSince).not.toBeNull();
    const again = await engineer
      .post(v1(`/samples/${id}/retest`))
      .send({ reason: 'Odd' })
      .expect(409);
    expect(problemOf(again).detail).toBe('Marco Castellane has asked for a re-test of this sample already.');
  });

  it('answered with a result keeps both: the new one stands and is not held', async () => {
    const id = await addSample({ held: true, value: 1534 });
    await sql(`update samples set flags = '{far-from-last}' where id = $1`, [id]);
    await ask(id);
    const { body } = await answer(id, { answer: 'result', value: '1486,5', note: 'Second cell' }).expect(200);
    const retest = body as Retest;
    expect(retest).toMatchObject({
      answer: 'result',
      answeredBy: 'Tove Halbrook',
      resultValue: 1486.5,
      value: 1534,
    });
    const { versions } = await historyOf(id);
    expect(versions.map(({ value, heldSince }) => [value, heldSince])).toEqual([
      [1486.5, null],
      [1534, '2026-11-20T08:00:00.000Z'],
    ]);
    expect(versions[0]).toMatchObject({
      id: retest.resultSampleId,
      changeReason: 'Re-test: Second cell',
      flags: [],
    });
    const twice = await answer(id, { answer: 'result', value: '1486,5' }).expect(409);
    expect(problemOf(twice).detail).toMatch(/^No re-test of this sample is open/);
  });

  it.each([
    ['withdraw', { withdrawn: true, held: true }],
    ['release', { withdrawn: false, held: false }],
    ['hold', { withdrawn: false, held: true }],
  ])('with no bottle left, the result is %s', async (then, expected) => {
    const id = await addSample({ held: true });
    await ask(id);
    await answer(id, { answer: 'no-bottle', then, note: '' }).expect(200);
    const [version] = (await historyOf(id)).versions;
    expect({ withdrawn: version!.withdrawnAt !== null, held: version!.heldSince !== null }).toEqual(expected);
  });

  it('needs to be told what becomes of the held result', async () => {
    const id = await addSample({ held: true });
    await ask(id);
    const refused = await answer(id, { answer: 'no-bottle', note: '' }).expect(400);
    expect(fieldsOf(refused)).toEqual([{ path: 'then', message: 'Choose what becomes of the held result.' }]);
  });

  it('goes with the sample to a corrected version', async () => {
    const id = await addSample({ held: true });
    await ask(id);
    const { body } = await correct(id, { value: '1479' }).expect(200);
    const { currentId, retests } = body as SampleHistory;
    expect(retests).toEqual([expect.objectContaining({ sampleId: currentId, answer: null })]);
    await answer(currentId, { answer: 'result', value: '1478' }).expect(200);
    expect((await historyOf(id)).versions.map(({ value }) => value)).toEqual([1478, 1479, 1480]);
  });

  it('stands in the list of the site, the open ones first', async () => {
    const { body } = await lab.technician.get(v1(`/sites/${lab.siteId}/retests`)).expect(200);
    const answers = (body.rows as Retest[]).map(({ answer: given }) => given);
    expect(answers.length).toBeGreaterThan(3);
    expect(answers.indexOf(null)).toBe(0);
    expect(answers.lastIndexOf(null)).toBe(answers.filter((given) => given === null).length - 1);
  });
});

describe('pairing of a sample', () => {
  beforeAll(async () => {
    await sql(
      `update revisions set decision = 'approved', decided_at = '2026-11-02', decided_by = $2, effective_from = '2026-11-02' where id = $1`,
      [lab.revisionId, engineer.personId],
    );
    await sql('update soft_sensors set steady_state_gate = false where id = $1', [lab.softSensorId]);
    // The estimate rises by 1 °C every 5 minutes: 1,480 °C at 06:00.
    await sql(
      `insert into readings (site_id, tag_id, at, value)
       select site_id, estimate_tag_id, '2026-11-20T00:00:00Z'::timestamptz + i * interval '5 minutes', 1408 + i
       from soft_sensors, generate_series(0, 144) i where id = $1`,
      [lab.softSensorId],
    );
  });

  const standing = async (id: number) => {
    await server.drainJobs();
    const rows = await sql<{ estimate: number; not_counted: string | null }>(
      'select estimate, not_counted from pairs where sample_id = $1 and superseded_at is null',
      [id],
    );
    return rows.map(({ estimate, not_counted }) => [estimate, not_counted]);
  };

  it('is done anew when it is held and when it is released, and every pair is kept', async () => {
    const id = await addSample();
    await correct(await addSample(), { value: '1479' }).expect(200);
    expect(await standing(id)).toEqual([[1480, null]]);
    await engineer
      .post(v1(`/samples/${id}/retest`))
      .send({ reason: 'Odd' })
      .expect(200);
    expect(await standing(id)).toEqual([[1480, 'held']]);
    await engineer
      .post(v1(`/samples/${id}/release`))
      .send({ reason: 'Agrees', version: 1 })
      .expect(200);
    expect(await standing(id)).toEqual([[1480, null]]);
    expect(await sql('select id from pairs where sample_id = $1', [id])).toHaveLength(3);
  });

  it('passes from a version to the one in its place', async () => {
    const id = await addSample();
    const { body } = await correct(id, { takenAt: '2026-11-20T05:30:00Z' }).expect(200);
    expect(await standing(id)).toEqual([]);
    expect(await standing((body as SampleHistory).currentId)).toEqual([[1474, null]]);
  });

  it('takes the average of the estimate over the time of a composite', async () => {
    const id = await addSample({ compositeMs: 4 * 3_600_000 });
    await correct(await addSample(), { value: '1478' }).expect(200);
    // From 02:00 (1,432) to 06:00 (1,480): 1,456.
    expect(await standing(id)).toEqual([[expect.closeTo(1456, 6), null]]);
  });

  it('does not count a composite with a stop for more than a tenth of its time', async () => {
    const stop = (from: string, to: string) =>
      Promise.all(
        (
          [
            ['stop', from],
            ['start', to],
          ] as const
        ).map(([kind, at]) =>
          sql(
            `insert into events (site_id, unit_id, kind, at, note, recorded_by, recorded_at) values ($1, $2, $3, $4, '', $5, now())`,
            [lab.siteId, lab.unitId, kind, at, engineer.personId],
          ),
        ),
      );
    const id = await addSample({ compositeMs: 4 * 3_600_000 });
    await stop('2026-11-20T03:00:00Z', '2026-11-20T03:20:00Z');
    await correct(await addSample(), { value: '1477' }).expect(200);
    expect((await standing(id)).map(([, why]) => why)).toEqual([null]);
    await stop('2026-11-20T04:00:00Z', '2026-11-20T04:10:00Z');
    const { body } = await correct(id, { value: '1450' }).expect(200);
    expect((await standing((body as SampleHistory).currentId)).map(([, why]) => why)).toEqual([
      'unit-stopped',
    ]);
  });
});
