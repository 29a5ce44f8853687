import { beforeAll, describe, expect, it } from 'vitest';
import { makeScene, type Scene } from '../support/changes.ts';
import { sheetFields } from '../support/sheet-fields.ts';
import { type Agent, useServer } from '../support/server.ts';

const server = useServer();
let scene: Scene;

beforeAll(async () => {
  scene = await makeScene(server);
});

/** How each thing that carries a version is saved; `name` is what the two people disagree about. */
interface Thing {
  who: (scene: Scene) => Agent;
  path: (scene: Scene) => string;
  body: (scene: Scene, name: string, version: number) => object;
  /** What was saved, in the reply and in `current`. */
  saved: (row: Record<string, unknown>) => unknown;
}
const nameOf = (row: Record<string, unknown>): unknown => row.name;
const open = { archived: false };
const noRange = { rangeLow: null, rangeHigh: null };
const method = { quantity: '', unit: '°C', repeatability: null, reproducibility: null };
const engineer = (s: Scene) => s.engineer;

const things: Record<string, Thing> = {
  person: {
    who: (s) => s.administrator,
    path: (s) => `/people/${s.technician.personId}`,
    body: (s, name, version) => ({
      name,
      email: s.technician.email,
      administrator: false,
      roles: [],
      deactivated: false,
      version,
    }),
    saved: nameOf,
  },
  site: {
    who: (s) => s.administrator,
    path: (s) => `/sites/${s.siteId}`,
    body: (_s, name, version) => ({ name, zone: 'UTC', ...open, version }),
    saved: nameOf,
  },
  area: {
    who: engineer,
    path: (s) => `/areas/${s.areaId}`,
    body: (_s, name, version) => ({ name, ...open, version }),
    saved: nameOf,
  },
  unit: {
    who: engineer,
    path: (s) => `/units/${s.unitId}`,
    body: (s, name, version) => ({ name, areaId: s.areaId, ...open, version }),
    saved: nameOf,
  },
  tag: {
    who: engineer,
    path: (s) => `/tags/${s.tagId}`,
    body: (_s, name, version) => ({ name, unit: '°C', unitId: null, ...noRange, ...open, version }),
    saved: nameOf,
  },
  'sample point': {
    who: engineer,
    path: (s) => `/sample-points/${s.samplePointId}`,
    body: (_s, name, version) => ({ name, unitId: null, ...open, version }),
    saved: nameOf,
  },
  method: {
    who: engineer,
    path: (s) => `/methods/${s.methodId}`,
    body: (_s, name, version) => ({ name, ...method, ...open, version }),
    saved: nameOf,
  },
  'data sheet': {
    who: engineer,
    path: (s) => `/soft-sensors/${s.softSensorId}`,
    body: (s, name, version) => ({
      fields: sheetFields({ unitId: s.unitId, tagName: 'TY-1', name, ownerId: s.engineer.personId }),
      version,
    }),
    saved: (row) => (row.fields as { name: string } | undefined)?.name ?? row.name,
  },
};

it('names who saved last, and when', async () => {
  const body = { name: 'Hot end', ...open, version: 1 };
  const other = await server.signedIn({
    name: 'Jun Brightwell',
    roles: [{ siteId: scene.siteId, role: 'engineer' }],
  });
  const area = await scene.engineer
    .post(`/api/v1/sites/${scene.siteId}/areas`)
    .send({ name: 'Hot' })
    .expect(200);
  server.now.value = new Date('2031-12-01T07:00:00Z');
  await other.put(`/api/v1/areas/${area.body.id}`).send(body).expect(200);
  server.now.value = null;
  const late = await scene.engineer.put(`/api/v1/areas/${area.body.id}`).send(body).expect(409);
  expect(late.body.current).toMatchObject({
    name: 'Hot end',
    savedBy: 'Jun Brightwell',
    savedAt: '2031-12-01T07:00:00.000Z',
  });
});

describe.each(Object.entries(things))('a %s that two people save', (_what, thing) => {
  const save = (name: string, version: number) =>
    thing
      .who(scene)
      .put(`/api/v1${thing.path(scene)}`)
      .send(thing.body(scene, name, version));

  it('keeps the first, and shows the second what stands now', async () => {
    const first = await save('Saved first', 1).expect(200);
    expect(first.body.version).toBe(2);
    const second = await save('Saved second', 1).expect(409);
    expect(second.body).toMatchObject({ code: 'stale', title: 'Somebody else saved this meanwhile' });
    expect(second.body.current.version).toBe(2);
    expect(thing.saved(second.body.current)).toBe('Saved first');
    const again = await save('Saved second', second.body.current.version).expect(200);
    expect(thing.saved(again.body)).toBe('Saved second');
  });

  it('is saved once when both save at the same moment', async () => {
    const answers = await Promise.all(['One', 'Two', 'Three'].map((name) => save(name, 3)));
    expect(answers.map(({ status }) => status).sort()).toEqual([200, 409, 409]);
    const winner = answers.find(({ status }) => status === 200)!;
    for (const { body } of answers.filter(({ status }) => status === 409)) {
      expect(thing.saved(body.current)).toBe(thing.saved(winner.body));
    }
  });

  it('is not saved by a version that is yet to come', async () => {
    const answer = await save('From the future', 99).expect(409);
    expect(answer.body.code).toBe('stale');
  });
});
