import { beforeAll, describe, expect, it } from 'vitest';
import type { SampleImportView } from '../../shared/contracts/sample-import.ts';
import type { SampleMends } from '../../shared/contracts/sample-mends.ts';
import { type Laboratory, makeLaboratory, problemOf, rowAt, wordsOf } from '../support/laboratory.ts';
import { useServer } from '../support/server.ts';

const server = useServer();
let lab: Laboratory;

beforeAll(async () => {
  lab = await makeLaboratory(server);
});

const header = 'Sample no.;Taken;Value;Unit;Point';
const mend = (view: SampleImportView, mends: SampleMends) =>
  lab.technician
    .put(`/api/v1/sample-imports/${view.import.id}/mends`)
    .send({ mends, version: view.import.version });
const mended = async (view: SampleImportView, mends: SampleMends) =>
  (await mend(view, mends).expect(200)).body as SampleImportView;
const added = async (view: SampleImportView) => (await lab.commit(view).expect(200)).body as SampleImportView;

describe('a refused row', () => {
  const file = `${header}
M-1;28.11.2026 06:00;1482,5;°C;Tarnby
M-2;28.11.2026 14:00;14 82,5 approx;°C;Tarnby
M-3;31.11.2026 06:00;1490,5;°C;Tarnby
M-4;28.11.2026 22:00;1477,5;°C;Tarnby`;

  it('goes in once what is wrong was written anew, and the file stays as it was sent', async () => {
    let view = await lab.upload(file);
    expect(view.import.counts).toMatchObject({ added: 2, refused: 2 });
    view = await mended(view, { '3': { value: '1482,5' } });
    expect(view.import.counts).toMatchObject({ added: 3, refused: 1 });
    view = await mended(view, { '4': { takenAt: '2026-11-30 06:00' } });
    expect(view.import.counts).toMatchObject({ added: 4, refused: 0 });
    expect(view.mends).toEqual({ '3': { value: '1482,5' }, '4': { takenAt: '2026-11-30 06:00' } });
    const { import: row } = await added(view);
    const { rows } = await lab.samples({ importId: row.id });
    expect(Object.fromEntries(rows.map(({ sampleNumber, value }) => [sampleNumber, value]))).toEqual({
      'M-1': 1482.5,
      'M-2': 1482.5,
      'M-3': 1490.5,
      'M-4': 1477.5,
    });
    expect(rows.find(({ sampleNumber }) => sampleNumber === 'M-3')).toMatchObject({
      takenAt: '2026-11-30T05:00:00.000Z',
    });
  });

  it('can be left out, and taken back as the file has it', async () => {
    let view = await lab.upload(file.replaceAll('M-', 'L-'));
    view = await mended(view, { '3': { leaveOut: true } });
    expect(rowAt(view, 3)).toMatchObject({ outcome: 'skipped' });
    view = await mended(view, { '3': {} });
    expect(rowAt(view, 3)).toMatchObject({ outcome: 'refused' });
    expect(view.mends).toEqual({});
  });

  it('says what is wrong with what was written instead', async () => {
    const view = await mended(await lab.upload(file.replaceAll('M-', 'N-')), {
      '3': { value: 'about 1480' },
    });
    expect(rowAt(view, 3).outcome).toBe('refused');
    expect(wordsOf(rowAt(view, 3))).toContain('“about 1480”');
  });

  it('that somebody else mended meanwhile is shown as it stands', async () => {
    const view = await lab.upload(file.replaceAll('M-', 'O-'));
    await mended(view, { '3': { value: '1482,5' } });
    const answer = await mend(view, { '3': { value: '1500' } }).expect(409);
    expect(problemOf(answer).current).toMatchObject({ mends: { '3': { value: '1482,5' } } });
  });
});

describe('a file that was added with rows refused', () => {
  it('is added to once they are mended, and no sample doubles', async () => {
    let view = await added(
      await lab.upload(`${header}
P-1;27.11.2026 06:00;1482,5;°C;Tarnby
P-2;27.11.2026 14:00;none yet;°C;Tarnby`),
    );
    expect(view).toMatchObject({ moreToAdd: 0, import: { counts: { added: 1, refused: 1 } } });
    view = await mended(view, { '3': { value: '1480' } });
    expect(view.moreToAdd).toBe(1);
    expect(rowAt(view, 2)).toMatchObject({ outcome: 'added', stored: true });
    expect(rowAt(view, 3)).toMatchObject({ outcome: 'added', stored: false });
    view = await added(view);
    expect(view).toMatchObject({ moreToAdd: 0, import: { counts: { added: 2, refused: 0 } } });
    expect((await lab.samples({ importId: view.import.id })).total).toBe(2);
    const again = await lab.commit(view).expect(409);
    expect(problemOf(again).detail).toContain('There is nothing to add.');
  });

  it('is added to once a name of a point is known, for all rows that bear it', async () => {
    let view = await added(
      await lab.upload(`${header}
Q-1;26.11.2026 06:00;1482,5;°C;Tarnby
Q-2;26.11.2026 14:00;1481,5;°C;Crown 9
Q-3;26.11.2026 22:00;1480,5;°C;Crown 9`),
    );
    expect(view.import.counts).toMatchObject({ added: 1, refused: 2 });
    const points = await lab.technician.get(`/api/v1/sites/${lab.siteId}/sample-points`).expect(200);
    const point = points.body.rows.find(({ id }: { id: number }) => id === lab.samplePointId);
    await lab.technician
      .put(`/api/v1/sample-points/${point.id}`)
      .send({
        name: point.name,
        unitId: point.unitId,
        aliases: ['Crown 9'],
        archived: false,
        version: point.version,
      })
      .expect(200);
    const now = await lab.technician.get(`/api/v1/sample-imports/${view.import.id}`).expect(200);
    view = now.body as SampleImportView;
    expect(view.moreToAdd).toBe(2);
    view = await added(view);
    expect((await lab.samples({ importId: view.import.id })).total).toBe(3);
  });

  it('is taken out whole, both what went in at first and later', async () => {
    let view = await added(
      await lab.upload(`${header}
R-1;25.11.2026 06:00;1482,5;°C;Tarnby
R-2;25.11.2026 14:00;?;°C;Tarnby`),
    );
    view = await added(await mended(view, { '3': { value: '1480' } }));
    await lab.technician.post(`/api/v1/sample-imports/${view.import.id}/undo`).send({}).expect(200);
    expect((await lab.samples({ importId: view.import.id })).total).toBe(0);
    const refused = await mend(view, { '3': { value: '1480' } }).expect(409);
    expect(problemOf(refused).detail).toContain('Upload the file again');
  });
});

describe('the download of refused rows', () => {
  it('is known by the file it came from once mended and sent, and only its rows go in', async () => {
    const first = await added(
      await lab.upload(`${header}
S-1;24.11.2026 06:00;1482,5;°C;Tarnby
S-2;24.11.2026 14:00;14x82;°C;Tarnby`),
    );
    const { text } = await lab.technician
      .get(`/api/v1/sample-imports/${first.import.id}/refused.csv`)
      .expect(200);
    expect(text).toContain('S-2');
    const view = await lab.upload(text.replace(';14x82;', ';1482;'), 'week-48-refused.csv');
    expect(view.recognised).toMatchObject({ taken: true });
    expect(view.import.counts).toMatchObject({ rows: 1, added: 1 });
  });
});
