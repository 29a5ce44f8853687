import { beforeAll, describe, expect, it } from 'vitest';
import type { ImportProfile } from '../../shared/contracts/sample-profiles.ts';
import { type Laboratory, makeLaboratory, problemOf } from '../support/laboratory.ts';
import { useServer } from '../support/server.ts';

const server = useServer();
let lab: Laboratory;
let elsewhere: Laboratory;

beforeAll(async () => {
  lab = await makeLaboratory(server);
  elsewhere = await makeLaboratory(server, 'Ostrander');
});

// All of it is open to doubt: no unit, days up to 12 only, a comma that may part thousands.
const doubtful = (prefix: string, day = '03/04/2026') => `Probe;Entry;Finding
${prefix}1;${day} 06:00;1,482
${prefix}2;${day} 14:00;1,491`;
const said = {
  unit: '°C',
  decimal: '.',
  dateOrder: 'day-month-year',
  columns: { sampleNumber: 0, takenAt: 1, value: 2 },
} as const;
const profiles = async (of = lab): Promise<ImportProfile[]> =>
  (await of.technician.get(`/api/v1/sites/${of.siteId}/import-profiles`).expect(200)).body.rows;
const change = (profile: ImportProfile, body: object, of = lab) =>
  of.technician
    .put(`/api/v1/import-profiles/${profile.id}`)
    .send({ name: profile.name, archived: false, version: profile.version, ...body });

describe('a file whose reading a person settled', () => {
  it('teaches the site how the next of its kind is read', async () => {
    const open = await lab.upload(doubtful('A'), 'furnace-wk14.csv');
    expect(open.outcome).toBeNull();
    expect(open.recognised).toBeNull();
    const columns = { ...open.preview.proposed.columns, ...said.columns };
    const view = await lab.add(doubtful('A'), { ...said, columns, samplePointId: lab.samplePointId });
    expect(view.recognised).toMatchObject({ taken: true });
    const next = await lab.upload(doubtful('B'), 'furnace-wk15.csv');
    expect(next.recognised).toMatchObject({ name: 'week', taken: true });
    expect(next.import.counts).toMatchObject({ rows: 2, added: 2 });
    expect(next.import.mapping).toMatchObject({ dateOrder: 'day-month-year', decimal: '.' });
    expect(next.rows[0]).toMatchObject({ takenAt: '2026-04-03T04:00:00.000Z' });
  });

  it('teaches no other site', async () => {
    expect((await elsewhere.upload(doubtful('C'))).recognised).toBeNull();
    expect((await profiles(elsewhere)).filter(({ columns }) => columns.includes('probe'))).toEqual([]);
  });

  it('is not forced on a file that can’t be read so', async () => {
    const view = await lab.upload(doubtful('D', '03/28/2026'));
    expect(view.recognised).toMatchObject({ taken: false });
    expect(view.preview.proposed.dateOrder).toBe('month-day-year');
  });
});

describe('a profile', () => {
  it('is renamed, and a stale change is shown what stands', async () => {
    const [profile] = await profiles();
    await change(profile!, { name: 'Furnace balance' }).expect(200);
    const stale = await change(profile!, { name: 'Other' }).expect(409);
    expect(problemOf(stale).current).toMatchObject({ name: 'Furnace balance' });
    expect((await profiles())[0]).toMatchObject({ name: 'Furnace balance' });
  });

  it('is forgotten, so that the next file is asked about anew', async () => {
    const [profile] = await profiles();
    await change(profile!, { archived: true }).expect(200);
    expect((await lab.upload(doubtful('E'))).outcome).toBeNull();
  });

  it('can’t be taken back while files of the kind have another', async () => {
    const open = await lab.upload(doubtful('F'));
    const columns = { ...open.preview.proposed.columns, ...said.columns };
    await lab.add(doubtful('F'), { ...said, columns, samplePointId: lab.samplePointId });
    const old = (await profiles()).find(({ archivedAt }) => archivedAt !== null)!;
    const refused = await change(old, { archived: false }).expect(409);
    expect(problemOf(refused).detail).toContain('Forget that one first');
  });

  it('of another site does not exist', async () => {
    const [profile] = await profiles();
    await change(profile!, { name: 'Taken over' }, elsewhere).expect(404);
  });
});
