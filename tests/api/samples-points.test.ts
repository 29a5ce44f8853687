import { beforeAll, describe, expect, it } from 'vitest';
import { type Laboratory, makeLaboratory, problemOf } from '../support/laboratory.ts';
import { useServer } from '../support/server.ts';

const server = useServer();
let lab: Laboratory;
let points: string;
let methods: string;

beforeAll(async () => {
  lab = await makeLaboratory(server);
  points = `/api/v1/sites/${lab.siteId}/sample-points`;
  methods = `/api/v1/sites/${lab.siteId}/methods`;
});

const method = {
  name: 'Pyrometry',
  quantity: 'temperature',
  unit: '°C',
  repeatability: 4,
  reproducibility: 9,
};

describe('sample points', () => {
  it('say which soft sensors their samples go to', async () => {
    const { body } = await lab.technician.get(points).expect(200);
    expect(body.rows).toEqual([
      {
        id: lab.samplePointId,
        siteId: lab.siteId,
        unitId: lab.unitId,
        unitName: 'Tarnby',
        name: 'Tarnby',
        aliases: [],
        archivedAt: null,
        version: 1,
        goesTo: [
          { softSensorId: lab.softSensorId, tagName: 'Tarnby TY', unit: '°C', methodId: lab.methodId },
        ],
      },
    ]);
  });

  it('are added, renamed, archived and taken back', async () => {
    const added = await lab.technician.post(points).send({ name: 'KX-10', unitId: lab.unitId }).expect(200);
    const change = (name: string, archived: boolean, version: number) =>
      lab.technician
        .put(`/api/v1/sample-points/${added.body.id}`)
        .send({ name, unitId: null, archived, version });
    const renamed = await change('KX-11', false, 1).expect(200);
    expect(renamed.body).toMatchObject({ name: 'KX-11', unitId: null, version: 2, archivedAt: null });
    const archived = await change('KX-11', true, 2).expect(200);
    expect(archived.body.archivedAt).not.toBeNull();
    expect((await change('KX-11', false, 3).expect(200)).body.archivedAt).toBeNull();
  });

  it('can’t share a name, whatever its case', async () => {
    const answer = await lab.technician.post(points).send({ name: 'TARNBY', unitId: null }).expect(400);
    const message = 'There is a sample point TARNBY at this site already. Choose another name.';
    expect(problemOf(answer).fields).toEqual([{ path: 'name', message }]);
  });

  it('go by other names, each of which leads to one point only', async () => {
    const add = (name: string, aliases: string[]) =>
      lab.technician.post(points).send({ name, unitId: null, aliases });
    const added = await add('KX-20', ['Crown 20', 'kx20']).expect(200);
    expect(added.body.aliases).toEqual(['Crown 20', 'kx20']);
    const refused = async (name: string, aliases: string[]) =>
      problemOf(await add(name, aliases).expect(400)).fields;
    expect(await refused('crown 20', [])).toEqual([
      { path: 'name', message: 'KX-20 goes by the name crown 20 already. Take it from there first.' },
    ]);
    expect(await refused('KX-21', ['kx-20'])).toEqual([
      {
        path: 'aliases',
        message: 'There is a sample point kx-20 at this site already. Choose another name.',
      },
    ]);
    expect(await refused('KX-21', ['Twice', 'twice'])).toEqual([
      { path: 'aliases', message: 'twice stands here twice. Write each name once.' },
    ]);
    const change = (body: object, version: number) =>
      lab.technician
        .put(`/api/v1/sample-points/${added.body.id}`)
        .send({ name: 'KX-20', unitId: null, archived: false, version, ...body });
    expect((await change({}, 1).expect(200)).body.aliases).toEqual(['Crown 20', 'kx20']);
    expect((await change({ aliases: [] }, 2).expect(200)).body.aliases).toEqual([]);
    await add('crown 20', []).expect(200);
  });

  it('stay in use while a soft sensor takes its samples there', async () => {
    const body = { name: 'Tarnby', unitId: lab.unitId, archived: true, version: 1 };
    const answer = await lab.technician
      .put(`/api/v1/sample-points/${lab.samplePointId}`)
      .send(body)
      .expect(409);
    expect(problemOf(answer).detail).toBe(
      'Tarnby TY takes its samples from Tarnby. Name another point on the data sheet first.',
    );
  });
});

describe('methods', () => {
  it('are added with their precision, changed, archived and taken back', async () => {
    const added = await lab.technician.post(methods).send(method).expect(200);
    expect(added.body).toMatchObject({ ...method, version: 1, archivedAt: null });
    const change = (archived: boolean, version: number) =>
      lab.technician
        .put(`/api/v1/methods/${added.body.id}`)
        .send({ ...method, reproducibility: 8, archived, version });
    expect((await change(true, 1).expect(200)).body).toMatchObject({ reproducibility: 8, version: 2 });
    expect((await change(false, 2).expect(200)).body.archivedAt).toBeNull();
  });

  it('can’t have a precision below nothing, or a name twice', async () => {
    const negative = await lab.technician
      .post(methods)
      .send({ ...method, name: 'M2', repeatability: -1 })
      .expect(400);
    expect(problemOf(negative).fields).toEqual([
      { path: 'repeatability', message: 'A precision limit can’t be negative.' },
    ]);
    const twice = await lab.technician
      .post(methods)
      .send({ ...method, name: 'tarnby' })
      .expect(400);
    expect(problemOf(twice).fields![0]!.path).toBe('name');
  });

  it('can’t have an R below their r', async () => {
    const body = { ...method, name: 'M3', repeatability: 5.1, reproducibility: 4 };
    const message =
      'R (4) can’t be below r (5.1): two laboratories differ at least as much as one differs from itself.';
    const answer = await lab.technician.post(methods).send(body).expect(400);
    expect(problemOf(answer).fields).toEqual([{ path: 'reproducibility', message }]);
    await lab.technician
      .post(methods)
      .send({ ...body, reproducibility: 5.1 })
      .expect(200);
  });

  it('no longer go with new files once archived', async () => {
    const { body } = await lab.technician
      .post(methods)
      .send({ ...method, name: 'Old way' })
      .expect(200);
    await lab.technician
      .put(`/api/v1/methods/${body.id}`)
      .send({ ...method, name: 'Old way', archived: true, version: 1 })
      .expect(200);
    await expect(lab.dryRun('taken;value\n2026-11-29 06:00;1480,5\n', { methodId: body.id })).rejects.toThrow(
      /400/,
    );
  });
});

it('a reader sees both and changes neither', async () => {
  const reader = await server.signedIn({ roles: [{ siteId: lab.siteId, role: 'reader' }] });
  await reader.get(points).expect(200);
  await reader.get(methods).expect(200);
  await reader.post(points).send({ name: 'R-1', unitId: null }).expect(403);
  await reader.post(methods).send(method).expect(403);
});
