import { beforeAll, beforeEach, describe, expect, it, vi } from 'vitest';
import type { SampleImportView } from '../../shared/contracts/sample-import.ts';
import {
  type Laboratory,
  makeLaboratory,
  mappingOf,
  problemOf,
  rowAt,
  sayMapping,
  wordsOf,
} from '../support/laboratory.ts';
import { useServer } from '../support/server.ts';

const server = useServer();
let lab: Laboratory;
let marks = 0;

beforeAll(async () => {
  lab = await makeLaboratory(server);
});
beforeEach(() => {
  server.now.value = new Date('2026-11-30T05:40:00Z');
});

const sql = async <Row extends object>(text: string, values: unknown[] = []): Promise<Row[]> =>
  (await server.context.pool.query<Row>(text, values)).rows;
const current = async () => (await lab.samples({ perPage: 200 })).rows;

/** Starts both while the site's commits are held up, and lets them go once both wait: they meet for certain. */
async function bothWaiting<T>(start: () => [PromiseLike<T>, PromiseLike<T>]): Promise<T[]> {
  const holder = await server.context.pool.connect();
  try {
    await holder.query('begin');
    await holder.query(`select pg_advisory_xact_lock(hashtext('sample-imports'), $1)`, [lab.siteId]);
    const answers = Promise.all(start());
    await vi.waitFor(
      async () => {
        const [waiting] = await sql<{ n: number }>(
          `select count(*)::int as n from pg_locks where locktype = 'advisory' and not granted and objid = $1`,
          [lab.siteId],
        );
        expect(waiting!.n).toBe(2);
      },
      { timeout: 20_000, interval: 20 },
    );
    await holder.query('commit');
    return await answers;
  } finally {
    holder.release();
  }
}

/** Rows with numbers that no other test uses: one cell list for each. */
function fileOf(...rows: string[][]): string {
  const mark = ++marks;
  return [
    'id;taken;reported;value',
    ...rows.map((cells, index) => [`F${mark}-${index + 1}`, ...cells].join(';')),
  ].join('\n');
}
const good = ['2026-11-29 06:00', '2026-11-29 09:00', '1480,5'];

describe('a commit', () => {
  it('stores what was written, how it is read, who entered it and from which line', async () => {
    const view = await lab.add(
      fileOf(good, ['2026-11-29', '', '<1200'], ['2026-11-29 07:00', '', ' 1 482,5 ']),
    );
    const rows = await sql(
      `select sample_number like 'F%' as numbered, taken_at, taken_on::text, reported_at, value, qualifier, unit, as_written, flags, line,
         version, entered_by, entered_at
       from samples where import_id = $1 order by line`,
      [view.import.id],
    );
    const entered = {
      numbered: true,
      unit: '°C',
      version: 1,
      entered_by: lab.technician.personId,
      entered_at: server.now.value,
    };
    const instant = (text: string) => new Date(text);
    expect(rows).toEqual([
      {
        ...entered,
        taken_at: instant('2026-11-29T05:00:00Z'),
        taken_on: null,
        reported_at: instant('2026-11-29T08:00:00Z'),
        value: 1480.5,
        qualifier: null,
        as_written: '1480,5',
        flags: [],
        line: 2,
      },
      {
        ...entered,
        taken_at: null,
        taken_on: '2026-11-29',
        reported_at: instant('2026-11-29T23:00:00Z'),
        value: 1200,
        qualifier: '<',
        as_written: '<1200',
        flags: ['date-only', 'censored'],
        line: 3,
      },
    ]);
    expect(view.import.counts).toMatchObject({ added: 2, flagged: 1, refused: 1 });
  });

  it('shows the samples, the last taken first, with the soft sensors that they go to', async () => {
    const view = await lab.add(fileOf(['2026-11-20 06:00', '', '1479'], ['2026-11-21', '', '1478,5'], good));
    const { rows, total } = await lab.samples({ importId: view.import.id });
    expect(total).toBe(3);
    expect(rows.map(({ takenAt, takenOn }) => takenAt ?? takenOn)).toEqual([
      '2026-11-29T05:00:00.000Z',
      '2026-11-21',
      '2026-11-20T05:00:00.000Z',
    ]);
    expect(rows[0]).toMatchObject({
      samplePoint: 'Tarnby',
      asWritten: '1480,5',
      importId: view.import.id,
      goesTo: [{ softSensorId: lab.softSensorId, tagName: 'Tarnby TY' }],
    });
    const second = await lab.samples({ importId: view.import.id, perPage: 2, page: 2 });
    expect({ taken: second.rows.map(({ takenAt }) => takenAt), total: second.total }).toEqual({
      taken: ['2026-11-20T05:00:00.000Z'],
      total: 3,
    });
  });

  it('asks for the soft sensors of its points to be judged again, once each', async () => {
    await server.drainJobs();
    await lab.add(fileOf(good, ['2026-11-29 07:00', '', '1481']));
    const waiting = await sql<{ key: string }>(
      `select key from graphile_worker.jobs where task_identifier = 'judge'`,
    );
    expect(waiting).toEqual([{ key: `judge:${lab.softSensorId}` }]);
  });

  it('leaves nothing where one row of many can’t be stored', async () => {
    const view = await lab.dryRun(
      fileOf(good, ['2026-11-29 07:00', '', '13'], ['2026-11-29 08:00', '', '1482']),
    );
    const before = await current();
    await sql(`alter table samples add constraint unlucky check (value <> 13) not valid`);
    await lab.commit(view).expect(500);
    await sql('alter table samples drop constraint unlucky');
    expect(await current()).toEqual(before);
    const { body } = await lab.technician.get(`/api/v1/sample-imports/${view.import.id}`).expect(200);
    expect(body).toMatchObject({
      import: { state: 'uploaded', version: view.import.version },
      outcome: view.outcome,
    });
    await lab.commit(view).expect(200);
    expect(await current()).toHaveLength(before.length + 3);
  });

  it('of two files that bring the same sample at once adds it from one and shows the other anew', async () => {
    const text = fileOf(good);
    const first = await lab.dryRun(text);
    const second = await lab.dryRun(`${text}\nG-1;2026-11-29 10:00;;1483`);
    const answers = await bothWaiting(() => [lab.commit(first), lab.commit(second)]);
    expect(answers.map(({ status }) => status).sort()).toEqual([200, 409]);
    const lost = answers.find(({ status }) => status === 409)!;
    expect(problemOf(lost).code).toBe('stale');
    const shown = problemOf(lost).current as unknown as SampleImportView;
    expect(shown.import.counts!.skipped).toBeGreaterThan(0);
  });

  it('is not made of another outcome than the one that was seen, even with equal counts', async () => {
    const text = fileOf(good, ['2026-11-29 07:00', '', '1481']);
    const [head, one, two] = text.split('\n') as [string, string, string];
    const view = await lab.dryRun(text);
    const unseen = await lab.dryRun([head, two, one].join('\n'));
    await lab.add([head, one].join('\n'));
    const stale = await lab.commit(view).expect(409);
    const now = problemOf(stale).current as unknown as SampleImportView;
    expect(problemOf(stale).detail).toBe(
      'What becomes of these rows has changed since it was shown. Now 2 rows: 1 will be added, 1 skipped. Look at them again.',
    );
    const swapped = { ...unseen, outcome: now.outcome };
    await lab.commit(swapped).expect(409);
    await lab.commit({ ...view, outcome: now.outcome }).expect(200);
  });

  it('after which the receipt still shows what was refused and why', async () => {
    const view = await lab.dryRun(
      fileOf(good, ['31.11.2026 06:00', '', '1480'], ['2026-11-29 07:00', '', '1481']),
    );
    const done = (await lab.commit(view).expect(200)).body as SampleImportView;
    server.now.value = new Date('2027-06-01T00:00:00Z');
    const { body } = await lab.technician.get(`/api/v1/sample-imports/${view.import.id}`).expect(200);
    const told = (rows: SampleImportView['rows']) => rows.map(({ stored: _stored, ...row }) => row);
    expect(body.rows).toEqual(done.rows);
    expect(told(done.rows)).toEqual(told(view.rows));
    expect(done.rows.map(({ line, stored }) => [line, stored])).toEqual([
      [3, false],
      [2, true],
      [4, true],
    ]);
    const undone = await lab.technician
      .post(`/api/v1/sample-imports/${view.import.id}/undo`)
      .send({})
      .expect(200);
    expect(told(undone.body.rows)).toEqual(told(done.rows));
  });

  it('is refused before the columns are said, and after it was made', async () => {
    const open = await lab.upload('id;taken;value\nA;03/04/2026 06:00;1480,5\n');
    const early = await lab.technician
      .post(`/api/v1/sample-imports/${open.import.id}/commit`)
      .send({ version: 1, outcome: 'none' })
      .expect(409);
    expect(problemOf(early).detail).toBe('Say what each column holds first.');
    const done = await lab.add(fileOf(good));
    const again = await sayMapping(lab.technician, done, mappingOf(done, {})).expect(409);
    expect(problemOf(again).detail).toBe(
      'The samples of this file were added already. Undo that first, or mend single rows.',
    );
    const early2 = await lab.technician
      .post(`/api/v1/sample-imports/${open.import.id}/undo`)
      .send({})
      .expect(409);
    expect(problemOf(early2).detail).toBe(
      'The samples of this file have not been added, so there is nothing to undo.',
    );
  });

  it('is left to people of the laboratory and engineers', async () => {
    const view = await lab.dryRun(fileOf(good));
    const manager = await server.signedIn({ roles: [{ siteId: lab.siteId, role: 'manager' }] });
    const body = { version: view.import.version, outcome: view.outcome };
    await manager.post(`/api/v1/sample-imports/${view.import.id}/commit`).send(body).expect(403);
    await manager.get(`/api/v1/sample-imports/${view.import.id}`).expect(200);
  });
});

describe('what is stored already', () => {
  it('is skipped when the same and never overwritten when it differs', async () => {
    const text = fileOf(good, ['2026-11-29 07:00', '', '1481'], ['2026-11-29 08:00', '', '1482']);
    await lab.add(text);
    const changed = text.replace('1481', '1499').replace('2026-11-29 08:00', '2026-11-29 08:30');
    const view = await lab.dryRun(changed);
    expect(view.rows.map(({ line, outcome }) => [line, outcome])).toEqual([
      [3, 'refused'],
      [4, 'refused'],
      [2, 'skipped'],
    ]);
    expect(wordsOf(rowAt(view, 2))).toBe('Stored before, unchanged.');
    expect(wordsOf(rowAt(view, 3))).toBe(
      'This sample is stored with another value: 1481 °C, taken 29 Nov 2026 07:00. A file does not overwrite a stored result: record a correction or a re-test under Samples, or leave the row out.',
    );
    expect(wordsOf(rowAt(view, 4))).toBe(
      'This sample is stored with another time: 1482 °C, taken 29 Nov 2026 08:00. A file does not overwrite a stored result: record a correction or a re-test under Samples, or leave the row out.',
    );
  });

  it('with a method is not stored again without one', async () => {
    const text = fileOf(good);
    await lab.add(text, { methodId: lab.methodId });
    const view = await lab.dryRun(text, { methodId: null });
    expect(wordsOf(rowAt(view, 2))).toBe(
      'This sample is stored with another method, or with none where this file has one (1480.5 °C, taken 29 Nov 2026 06:00).',
    );
  });

  it('can be added anew once it was taken out', async () => {
    const text = fileOf(good);
    const first = await lab.add(text);
    const undone = await lab.technician
      .post(`/api/v1/sample-imports/${first.import.id}/undo`)
      .send({})
      .expect(200);
    expect(undone.body.import).toMatchObject({ state: 'undone', undoneAt: '2026-11-30T05:40:00.000Z' });
    expect((await lab.samples({ importId: first.import.id })).total).toBe(0);
    const again = await lab.upload(text);
    expect(again.sameAs).toBeNull();
    await lab.add(text);
    const kept = await sql(`select withdrawn_at from samples where import_id = $1`, [first.import.id]);
    expect(kept).toEqual([{ withdrawn_at: server.now.value }]);
  });
});

describe('the refused rows as CSV', () => {
  it('carry their line and reason, can be mended and taken up, and run nothing in a spreadsheet', async () => {
    const view = await lab.dryRun(
      'id;taken;value\n=cmd|x;31.11.2026 06:00;-12,5\n@A;29.11.2026 06:00;"1480,5;0"\nB;29.11.2026 06:00;-3,5\n',
      {
        dateOrder: 'day-month-year',
      },
    );
    const { text, headers } = await lab.technician
      .get(`/api/v1/sample-imports/${view.import.id}/refused.csv`)
      .expect(200);
    expect(headers['content-disposition']).toBe('attachment; filename=week-48-refused.csv');
    expect(text.split('\r\n')).toEqual([
      '\ufeffRow;Why refused;id;taken;value',
      `2;31 November does not exist. Write the right date in the file.;"'=cmd|x";31.11.2026 06:00;-12,5`,
      `3;"“1480,5;0” is no number as this file writes them.";"'@A";29.11.2026 06:00;"1480,5;0"`,
      '',
    ]);
    const again = await lab.dryRun(text.replace('31.11', '28.11').replace('"1480,5;0"', '1480,5'));
    expect(again.import.counts).toMatchObject({ rows: 2, refused: 0 });
  });

  it('are the whole story of a formula: as text it goes in unharmed', async () => {
    const view = await lab.add(`id;taken;value\n=1+${++marks};2026-11-29 06:00;1480,5\n`);
    const { rows } = await lab.samples({ importId: view.import.id });
    expect(rows[0]).toMatchObject({ sampleNumber: `=1+${marks}`, value: 1480.5 });
  });
});
