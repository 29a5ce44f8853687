import { and, eq, isNull } from 'drizzle-orm';
import { describe, expect, it } from 'vitest';
import { samples } from '../../server/db/schema/index.ts';
import {
  at,
  get,
  makePlant,
  modelOf,
  type Plant,
  post,
  putInService,
  truth,
  writeInputs,
} from '../support/plant.ts';
import { type Agent, useServer } from '../support/server.ts';

const server = useServer();

interface View {
  import: { id: number; version: number; state: string; counts: Record<string, number> };
  preview: { proposed: Record<string, unknown> & { columns: Record<string, number | null> } };
  rows: { line: number; outcome: string; reasons: { code: string; figures: Record<string, unknown> }[] }[];
  outcome: string;
  sameAs: { importId: number } | null;
}

const upload = (agent: Agent, siteId: number, text: string | Buffer, name = 'results.csv') =>
  agent.post(`/api/v1/sites/${siteId}/sample-imports`).attach('file', Buffer.from(text), name);

async function technicianAt(plant: Plant): Promise<Agent> {
  return server.signedIn({ roles: [{ siteId: plant.siteId, role: 'technician' }] });
}

async function uploaded(agent: Agent, siteId: number, text: string): Promise<View> {
  const answer = await upload(agent, siteId, text);
  if (answer.status !== 200) throw new Error(JSON.stringify(answer.body));
  return answer.body;
}

const commit = (agent: Agent, view: View) =>
  agent
    .post(`/api/v1/sample-imports/${view.import.id}/commit`)
    .send({ version: view.import.version, outcome: view.outcome });

const standing = (plant: Plant) =>
  server.context.db
    .select()
    .from(samples)
    .where(and(eq(samples.siteId, plant.siteId), isNull(samples.withdrawnAt), isNull(samples.supersededAt)));

const file = (rows: string[]) => ['Sample number;Taken;Value (%);Point', ...rows].join('\n');
const reasonsOf = (view: View) =>
  Object.fromEntries(
    view.rows.map((row) => [row.line, row.reasons.map(({ code }) => code).join(' ') || row.outcome]),
  );

describe('a file of samples', () => {
  it('is read, shown row by row, added whole, and taken out again', async () => {
    const plant = await makePlant(server);
    server.now.value = at(24 * 300);
    const technician = await technicianAt(plant);
    const open = await uploaded(
      technician,
      plant.siteId,
      file([
        'A1;28.11.2025 06:00;12,5;P1',
        'A2;31.11.2025 06:00;12,5;P1',
        'A3;28.11.2025 07:00;;P1',
        'A4;28.11.2025 08:00;twelve;P1',
        'A5;28.11.2025 09:00;12,5;P9',
        'A6;28.11.2025 10:00;<0,5;P1',
        'A7;28.11.2025;12,5;P1',
        'A1;28.11.2025 06:00;12,5;P1',
        'A8;26.10.2025 02:30;12,5;P1',
        'A9;30.03.2025 02:30;12,5;P1',
        'A10;01.01.2030 06:00;12,5;P1',
      ]),
    );
    // One row stands in the hour that the clocks of the site leave out, so the zone is for a person to say.
    expect(open).toMatchObject({ outcome: null, import: { mapping: null } });
    const mapping = { ...open.preview.proposed, zone: 'Europe/Copenhagen' };
    const said = await technician
      .put(`/api/v1/sample-imports/${open.import.id}/mapping`)
      .send({ mapping, version: open.import.version })
      .expect(200);
    const view: View = said.body;
    expect(view.import.counts).toEqual({ rows: 11, added: 3, flagged: 2, held: 0, skipped: 1, refused: 7 });
    expect(reasonsOf(view)).toEqual({
      2: 'added',
      3: 'impossible-date',
      4: 'no-value',
      5: 'text-value',
      6: 'unknown-point',
      7: 'censored',
      8: 'date-only',
      9: 'same-row',
      10: 'double-hour',
      11: 'missing-hour',
      12: 'ahead',
    });
    expect(await standing(plant)).toHaveLength(0);

    const refused = await technician.get(`/api/v1/sample-imports/${view.import.id}/refused.csv`).expect(200);
    expect(refused.text).toContain('31 November does not exist.');
    expect(refused.text.trim().split('\r\n')).toHaveLength(8);

    const receipt = (await commit(technician, view).expect(200)).body as View;
    expect(receipt.import).toMatchObject({ state: 'committed', counts: { added: 3 } });
    const added = await standing(plant);
    expect(added.map((row) => [row.sampleNumber, row.value, row.qualifier, row.flags, row.takenOn])).toEqual(
      expect.arrayContaining([
        ['A1', 12.5, null, [], null],
        ['A6', 0.5, '<', ['censored'], null],
        ['A7', 12.5, null, ['date-only'], '2025-11-28'],
      ]),
    );
    expect(added.find((row) => row.sampleNumber === 'A1')!.takenAt!.toISOString()).toBe(
      '2025-11-28T05:00:00.000Z',
    );

    await technician.post(`/api/v1/sample-imports/${view.import.id}/undo`).send({}).expect(200);
    expect(await standing(plant)).toHaveLength(0);
    const again = await technician.post(`/api/v1/sample-imports/${view.import.id}/undo`).send({}).expect(409);
    expect(again.body.detail).toBe('The samples of this file were taken out already.');
  });

  it('judges the soft sensors of its points, and no longer once it is undone', async () => {
    const plant = await makePlant(server);
    server.now.value = at(60);
    const technician = await technicianAt(plant);
    await writeInputs(plant, 0, 50);
    const sensor = await putInService(plant, modelOf(plant));
    await server.drainJobs();
    const rows = Array.from(
      { length: 12 },
      (_, i) => `S${i};${at(i * 4).toISOString()};${(truth(i * 4) - 1).toFixed(6)};P1`,
    );
    const view = await uploaded(
      technician,
      plant.siteId,
      ['Sample number;Taken;Value (%);Point', ...rows].join('\n').replaceAll(',', ';'),
    );
    const unit = { ...view.preview.proposed, unit: '%' };
    const dry = (
      await technician
        .put(`/api/v1/sample-imports/${view.import.id}/mapping`)
        .send({ mapping: unit, version: view.import.version })
        .expect(200)
    ).body as View;
    await commit(technician, dry).expect(200);
    await server.drainJobs();
    const judged = await get(plant.engineer, `/soft-sensors/${sensor.id}`);
    expect(judged.status.counted).toBe(12);
    expect(judged.status.bias).toBeCloseTo(1, 5);
    await post(technician, `/sample-imports/${view.import.id}/undo`, {});
    await server.drainJobs();
    expect((await get(plant.engineer, `/soft-sensors/${sensor.id}`)).status.counted).toBe(0);
  });

  it('sent twice adds nothing twice, and says which file it was', async () => {
    const plant = await makePlant(server);
    server.now.value = at(24 * 300);
    const technician = await technicianAt(plant);
    const text = file(['B1;2025-11-28 06:00;1,5;P1', 'B2;2025-11-28 07:00;1,6;P1']);
    const first = await uploaded(technician, plant.siteId, text);
    await commit(technician, first).expect(200);
    const second = await uploaded(technician, plant.siteId, text);
    expect(second.sameAs).toMatchObject({ importId: first.import.id });
    expect(second.import.counts).toMatchObject({ added: 0, skipped: 2 });
    const nothing = await commit(technician, second).expect(409);
    expect(nothing.body.detail).toContain('nothing to add');
    const changed = await uploaded(technician, plant.siteId, text.replace('1,6', '1,7'));
    expect(reasonsOf(changed)).toMatchObject({ 3: 'stored-differs' });
  });

  it('is added by one of two who add it at once', async () => {
    const plant = await makePlant(server);
    server.now.value = at(24 * 300);
    const technician = await technicianAt(plant);
    const view = await uploaded(technician, plant.siteId, file(['C1;2025-11-28 06:00;1,5;P1']));
    const answers = await Promise.all([commit(technician, view), commit(technician, view)]);
    expect(answers.map(({ status }) => status).sort()).toEqual([200, 409]);
    expect(await standing(plant)).toHaveLength(1);
  });

  it('is added only as it was seen: another file may have brought its samples meanwhile', async () => {
    const plant = await makePlant(server);
    server.now.value = at(24 * 300);
    const technician = await technicianAt(plant);
    const first = await uploaded(
      technician,
      plant.siteId,
      file(['D1;2025-11-28 06:00;1,5;P1', 'D2;2025-11-28 07:00;1,5;P1']),
    );
    const other = await uploaded(technician, plant.siteId, file(['D1;2025-11-28 06:00;1,5;P1']));
    await commit(technician, other).expect(200);
    const refused = await commit(technician, first).expect(409);
    expect(refused.body).toMatchObject({
      code: 'stale',
      current: { import: { counts: { added: 1, skipped: 1 } } },
    });
    expect(await standing(plant)).toHaveLength(1);
  });

  it('never reaches a sample point of another site', async () => {
    const plant = await makePlant(server);
    const other = await makePlant(server);
    server.now.value = at(24 * 300);
    const technician = await technicianAt(plant);
    const view = await uploaded(
      technician,
      plant.siteId,
      'Sample number;Taken;Value\nE1;2025-11-28 06:00;1,5\n',
    );
    const mapping = {
      ...view.preview.proposed,
      decimal: ',',
      dateOrder: 'iso',
      unit: '',
      samplePointId: other.pointId,
    };
    const answer = await technician
      .put(`/api/v1/sample-imports/${view.import.id}/mapping`)
      .send({ mapping, version: view.import.version })
      .expect(400);
    expect(answer.body.fields).toEqual([
      {
        path: 'mapping.samplePointId',
        message: 'This sample point is not one in use at the site. Choose another.',
      },
    ]);
  });
});

describe('a file that holds no samples', () => {
  it.each([
    ['of 0 bytes', '', /0 bytes/],
    ['that is a workbook', Buffer.from([0x50, 0x4b, 3, 4, 20, 0, 0, 0]), /workbook is damaged/],
    ['that is a web page', '<!doctype html><html><body>Sign in</body></html>', /web page, not a CSV/],
    ['with one column', 'just words\nand more words\n', /Only one column/],
    ['without a header', '1;2;3\n4;5;6\n', /No line names the columns/],
  ])('%s is refused with a sentence beside the file', async (_what, content, sentence) => {
    const plant = await makePlant(server);
    server.now.value = null;
    const technician = await technicianAt(plant);
    const answer = await upload(technician, plant.siteId, content);
    expect(answer.status).toBe(422);
    expect(answer.body.detail).toMatch(sentence);
    expect(answer.body.fields[0].path).toBe('file');
    expect(JSON.stringify(answer.body)).not.toMatch(/at .*\.ts:/);
  });

  it('and a file over 20 MB is refused as too large', async () => {
    const plant = await makePlant(server);
    const technician = await technicianAt(plant);
    const answer = await upload(technician, plant.siteId, Buffer.alloc(20 * 1024 ** 2 + 1, 'a'));
    expect(answer.status).toBe(413);
    expect(answer.body.detail).toContain('larger than 20 MB');
  });
});
