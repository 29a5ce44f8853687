import { beforeAll, describe, expect, it } from 'vitest';
import { whatRestsOn } from '../../server/features/laboratory/rests.ts';
import type { SampleHistory } from '../../shared/contracts/standing-samples.ts';
import { problemOf } from '../support/laboratory.ts';
import { useServer } from '../support/server.ts';
import { makeStanding, type Standing, v1 } from '../support/standing-samples.ts';

const server = useServer();
let { lab, other, engineer, addSample, correct, historyOf, decideOn, sql } = {} as Standing;

beforeAll(async () => {
  ({ lab, other, engineer, addSample, correct, historyOf, decideOn, sql } = await makeStanding(server));
});

const fieldsOf = (answer: { body: unknown }) => problemOf(answer).fields;

describe('correcting a sample', () => {
  it('puts a new version in its place and keeps the old one with who, when and why', async () => {
    const id = await addSample();
    const { body } = await correct(id, { value: '1482,5', reason: 'Read off wrongly' }).expect(200);
    const { versions, currentId } = body as SampleHistory;
    expect(versions).toHaveLength(2);
    expect(versions[0]).toMatchObject({
      id: currentId,
      version: 2,
      value: 1482.5,
      asWritten: '1482,5',
      changed: true,
      enteredBy: 'Tove Halbrook',
      changeReason: 'Read off wrongly',
      supersededAt: null,
    });
    expect(versions[1]).toMatchObject({ id, version: 1, value: 1480, changeReason: null });
    expect(versions[1]!.supersededAt).not.toBeNull();
    const listed = await lab.samples({ samplePointId: lab.samplePointId });
    const shown = listed.rows.filter((row) => row.sampleNumber === versions[0]!.sampleNumber);
    expect(shown).toEqual([expect.objectContaining({ id: currentId, changed: true })]);
    expect((await historyOf(id)).currentId).toBe(currentId);
  });

  it('lists what was decided on the old value, and rewrites nothing of it', async () => {
    const id = await addSample();
    const calibrationId = await decideOn(id);
    const frozen = () => sql('select * from calibrations where id = $1', [calibrationId]);
    const before = await frozen();
    const { body } = await correct(id, { value: '1490' }).expect(200);
    expect((body as SampleHistory).decisions).toEqual([
      expect.objectContaining({
        calibrationId,
        tagName: 'Tarnby TY',
        decision: 'approved',
        decidedBy: 'Marco Castellane',
        sampleVersion: 1,
        reference: 1480,
      }),
    ]);
    expect(await frozen()).toEqual(before);
  });

  it('is refused where another version stands already, with what stands now', async () => {
    const id = await addSample();
    await correct(id, { value: '1481' }, engineer).expect(200);
    const answer = await correct(id, { value: '1482' }).expect(409);
    expect(problemOf(answer).code).toBe('stale');
    expect(problemOf(answer).detail).toMatch(
      /^Marco Castellane changed this sample on .* version 2 stands, 1481\u00a0°C\./,
    );
    expect((problemOf(answer).current as unknown as SampleHistory).versions[0]!.value).toBe(1481);
  });

  it('lets two who correct at once through one after the other', async () => {
    const id = await addSample();
    const answers = await Promise.all([
      correct(id, { value: '1481' }),
      correct(id, { value: '1482' }, engineer),
    ]);
    expect(answers.map(({ status }) => status).sort()).toEqual([200, 409]);
    expect((await historyOf(id)).versions).toHaveLength(2);
  });

  it('says beside the field what is wrong', async () => {
    const id = await addSample();
    const message = 'Write 1.482 or 1482: a comma before three digits can mean either.';
    expect(fieldsOf(await correct(id, { value: '1,482' }).expect(400))).toEqual([{ path: 'value', message }]);
    const unit = 'bar can’t be converted to °C. Write the value in °C.';
    expect(fieldsOf(await correct(id, { value: '5', unit: 'bar' }).expect(400))).toEqual([
      { path: 'unit', message: unit },
    ]);
    const ahead = await correct(id, { takenAt: '2999-01-01T00:00:00Z' }).expect(400);
    expect(fieldsOf(ahead)!.map(({ path }) => path)).toEqual(['takenAt', 'reportedAt']);
    expect(fieldsOf(await correct(id, { value: '1', reason: ' ' }).expect(400))).toEqual([
      { path: 'reason', message: 'Write why it is corrected.' },
    ]);
    expect(problemOf(await correct(id, { value: '1480' }).expect(409)).detail).toMatch(/^Nothing differs/);
    expect((await historyOf(id)).versions).toHaveLength(1);
  });

  it('moves it to another time or number, where that is free', async () => {
    const [first, second] = [await addSample(), await addSample()];
    const taken = (await historyOf(second)).versions[0]!.sampleNumber;
    const clash = await correct(first, { sampleNumber: taken }).expect(400);
    expect(fieldsOf(clash)![0]!.path).toBe('sampleNumber');
    const { body } = await correct(first, { sampleNumber: 'KX-new', takenAt: '2026-11-20T05:30:00Z' }).expect(
      200,
    );
    expect(body.versions[0]).toMatchObject({
      sampleNumber: 'KX-new',
      takenAt: '2026-11-20T05:30:00.000Z',
      value: 1480,
    });
  });

  it('makes a limit of a value with its sign, and flags it', async () => {
    const id = await addSample();
    const { body } = await correct(id, { value: '< 1200' }).expect(200);
    expect(body.versions[0]).toMatchObject({ value: 1200, qualifier: '<', flags: ['censored'] });
  });

  it('converts a value whose unit is stated, and keeps what was written', async () => {
    const id = await addSample();
    const { body } = await correct(id, { value: '2700', unit: '°F' }).expect(200);
    const [version] = (body as SampleHistory).versions;
    // By hand: (2700 − 32) · 5/9.
    expect(version!.value).toBeCloseTo(1482.2222, 4);
    expect(version).toMatchObject({ unit: '°C', statedUnit: '°F', statedValue: 2700, flags: ['converted'] });
    const again = await correct(version!.id, { value: '1482', version: 2 }).expect(200);
    expect(again.body.versions[0]).toMatchObject({ statedUnit: null, statedValue: null, flags: [] });
  });

  it('never reaches a point or a method of another site', async () => {
    const id = await addSample();
    for (const field of ['samplePointId', 'methodId'] as const) {
      const answer = await correct(id, { [field]: other[field] }).expect(400);
      expect(fieldsOf(answer)!.map(({ path }) => path)).toEqual([field]);
      expect(answer.text).not.toContain('Kallara');
    }
  });
});

describe('withdrawing a sample', () => {
  it('takes it from the lists, keeps it on record and says why', async () => {
    const id = await addSample();
    await lab.technician
      .post(v1(`/samples/${id}/withdraw`))
      .send({ reason: 'The wrong bottle', version: 1 })
      .expect(200);
    const { versions, deeds } = await historyOf(id);
    expect(versions[0]!.withdrawnAt).not.toBeNull();
    expect(deeds).toEqual([
      expect.objectContaining({ what: 'withdrawn', by: 'Tove Halbrook', reason: 'The wrong bottle' }),
    ]);
    expect((await lab.samples()).rows.map((row) => row.id)).not.toContain(id);
    const again = await correct(id, { value: '1' }).expect(409);
    expect(problemOf(again).detail).toMatch(/^Tove Halbrook withdrew this sample on/);
  });

  it('needs a reason', async () => {
    const id = await addSample();
    const answer = await lab.technician
      .post(v1(`/samples/${id}/withdraw`))
      .send({ reason: '', version: 1 })
      .expect(400);
    expect(fieldsOf(answer)).toEqual([{ path: 'reason', message: 'Write why it is withdrawn.' }]);
  });
});

describe('what rests on the samples of a file', () => {
  const rests = () => whatRestsOn(server.context.db, lab.siteId, lab.sampleImportId);

  it('is nothing at first, then each decision, correction and re-test, by name', async () => {
    await sql(
      `update sample_imports set state = 'committed', committed_at = now() - interval '1 hour' where id = $1`,
      [lab.sampleImportId],
    );
    const ids = [];
    for (let i = 0; i < 4; i++) ids.push(await addSample({ importId: lab.sampleImportId }));
    expect(await rests()).toBeNull();
    await decideOn(ids[0]!, 'declined');
    expect(await rests()).toBeNull();
    await decideOn(ids[1]!);
    await correct(ids[2]!, { value: '1' }).expect(200);
    await engineer
      .post(v1(`/samples/${ids[3]}/retest`))
      .send({ reason: 'Odd' })
      .expect(200);
    const numbers = await Promise.all(ids.map(async (id) => (await historyOf(id)).versions[0]!.sampleNumber));
    const says = await rests();
    expect(says).toMatch(
      /^These samples can’t be taken out again: recalibration \d+ of Tarnby TY, approved on /,
    );
    expect(says).toContain(`was decided on ${numbers[1]};`);
    expect(says).toContain(`${numbers[2]} has been corrected;`);
    expect(says).toContain(`a re-test of ${numbers[3]} was asked for.`);
    expect(await whatRestsOn(server.context.db, other.siteId, lab.sampleImportId)).toBeNull();
  });
});

describe('who may', () => {
  it('a reader and a manager see the history and change nothing', async () => {
    const id = await addSample({ held: true });
    for (const role of ['reader', 'manager'] as const) {
      const agent = await server.signedIn({ roles: [{ siteId: lab.siteId, role }] });
      await historyOf(id, agent);
      await correct(id, { value: '1' }, agent).expect(403);
      await agent
        .post(v1(`/samples/${id}/release`))
        .send({ reason: 'x', version: 1 })
        .expect(403);
    }
  });

  it('nobody of another site finds the sample', async () => {
    const id = await addSample();
    await other.technician.get(v1(`/samples/${id}/history`)).expect(404);
    await correct(id, { value: '1' }, other.technician).expect(404);
    await other.technician
      .post(v1(`/samples/${id}/retest`))
      .send({ reason: 'x' })
      .expect(404);
  });
});
