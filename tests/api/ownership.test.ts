import { beforeAll, describe, expect, it } from 'vitest';
import type { Duty } from '../../shared/contracts/duties.ts';
import type { SheetFields } from '../../shared/contracts/register.ts';
import { type Plant, get, makePlant, putInService } from '../support/plant.ts';
import { sheetFields } from '../support/sheet-fields.ts';
import { type Agent, useServer } from '../support/server.ts';

const server = useServer();
const external = { form: 'external', holdLimitMs: 600_000, residualSd: null };
let plant: Plant;
let administrator: Agent;
let marco: Agent;
let jun: Agent;
let technician: Agent;

beforeAll(async () => {
  plant = await makePlant(server);
  marco = plant.engineer;
  const at = (role: 'engineer' | 'technician') => ({ roles: [{ siteId: plant.siteId, role }] });
  jun = await server.signedIn({ name: 'Jun Brightwell', ...at('engineer') });
  technician = await server.signedIn({ name: 'Tove Halbrook', ...at('technician') });
  administrator = await server.signedIn({ administrator: true });
});

const inService = async (own: Partial<SheetFields> = {}): Promise<number> => {
  const people = { ownerId: marco.personId, deputyId: jun.personId };
  const fields = { importanceClass: 'A' as const, samplePointId: null, ...people, ...own };
  return (await putInService(plant, external, fields)).id;
};
const sheetOf = (id: number) => get(marco, `/soft-sensors/${id}`);
const gapsOf = async (id: number): Promise<Duty[]> =>
  (await get(plant.manager, '/duties', { softSensorId: id, kind: 'ownership-gap' })).rows;
const offer = (agent: Agent, id: number, toId: number, part: 'owner' | 'deputy' = 'owner') =>
  agent.post(`/api/v1/soft-sensors/${id}/handovers`).send({ part, toId, reason: 'Moves to the kilns' });
const answer = (agent: Agent, id: number, said: 'accepted' | 'declined', reason = '') =>
  agent.post(`/api/v1/handovers/${id}/answer`).send({ answer: said, reason });

async function changeRoles(agent: Agent, own: object) {
  const { rows } = await get(administrator, '/people');
  const person = rows.find(({ id }: { id: number }) => id === agent.personId);
  const { name, email, administrator: admin, roles, version, deactivatedAt } = person;
  const now = { name, email, administrator: admin, roles, version, deactivated: deactivatedAt !== null };
  return administrator
    .put(`/api/v1/people/${agent.personId}`)
    .send({ ...now, ...own })
    .expect(200);
}

describe('people on a data sheet', () => {
  const add = (own: Partial<SheetFields>) =>
    marco
      .post(`/api/v1/sites/${plant.siteId}/soft-sensors`)
      .send(sheetFields({ unitId: plant.unitId, ...own }));

  it('are refused beside their field: a deputy who is the owner, an owner who is no engineer', async () => {
    const same = await add({ ownerId: marco.personId, deputyId: marco.personId }).expect(400);
    expect(same.body.fields).toEqual([
      { path: 'deputyId', message: 'The deputy must be another person than the owner.' },
    ]);
    const people = {
      ownerId: plant.manager.personId,
      deputyId: technician.personId,
      approverId: technician.personId,
    };
    const roles = await add(people).expect(400);
    expect(roles.body.fields).toEqual([
      { path: 'ownerId', message: 'The owner must be an engineer of the site. Choose somebody who is.' },
      { path: 'deputyId', message: 'The deputy must be an engineer of the site. Choose somebody who is.' },
      {
        path: 'approverId',
        message: 'The approver must be an engineer or a manager of the site. Choose somebody who is.',
      },
    ]);
  });

  it.each(['A', 'B'] as const)(
    'of class %s are named before a model goes for approval',
    async (importanceClass) => {
      const { body } = await add({ importanceClass, ownerId: marco.personId }).expect(200);
      const draft = await marco
        .put(`/api/v1/soft-sensors/${body.id}/draft`)
        .send({ model: external, version: null });
      const propose = () =>
        marco
          .post(`/api/v1/soft-sensors/${body.id}/revisions`)
          .send({ version: draft.body.version, reason: 'First model', changeReference: '' });
      expect((await propose().expect(409)).body.detail).toContain('Name a deputy on its data sheet first');
      const { fields, version } = await sheetOf(body.id);
      const named = { ...fields, deputyId: jun.personId };
      await marco.put(`/api/v1/soft-sensors/${body.id}`).send({ fields: named, version }).expect(200);
      await propose().expect(200);
    },
  );

  it('change owner by handing over once it is in service, unless one names oneself', async () => {
    const id = await inService({ deputyId: null, importanceClass: 'C' });
    const { fields, version } = await sheetOf(id);
    const save = (agent: Agent) =>
      agent.put(`/api/v1/soft-sensors/${id}`).send({ fields: { ...fields, ownerId: jun.personId }, version });
    const refused = await save(marco).expect(400);
    expect(refused.body.fields).toEqual([
      { path: 'fields.ownerId', message: expect.stringContaining('by handing over') },
    ]);
    expect((await save(jun).expect(200)).body.owner.id).toBe(jun.personId);
  });
});

describe('handing over', () => {
  it('takes effect when the successor accepts, with who, when and why', async () => {
    const id = await inService();
    const { body } = await offer(marco, id, jun.personId).expect(200);
    expect(body).toMatchObject({ answer: null, mayAnswer: false, mayWithdraw: true });
    expect((await sheetOf(id)).owner.id).toBe(marco.personId);
    expect((await get(jun, '/handovers')).toAnswer.map((row: { id: number }) => row.id)).toContain(body.id);
    expect((await answer(marco, body.id, 'accepted').expect(403)).body.detail).toContain(
      'Only the person who was asked',
    );
    await answer(jun, body.id, 'accepted').expect(200);
    expect(await sheetOf(id)).toMatchObject({ owner: { id: jun.personId }, deputy: null });
    const history = await get(marco, `/soft-sensors/${id}/ownership`);
    expect(history.rows).toMatchObject([
      {
        owner: { id: jun.personId },
        until: null,
        reason: 'Moves to the kilns',
        recordedBy: { id: jun.personId },
      },
      { owner: { id: marco.personId }, until: history.rows[0].from },
    ]);
    expect(history.gaps).toEqual(['no-deputy']);
    expect(await gapsOf(id)).toMatchObject([{ gaps: ['no-deputy'], dueOn: expect.any(String) }]);
    expect((await answer(jun, body.id, 'declined', 'No').expect(409)).body.detail).toContain(
      'accepted already',
    );
  });

  it('changes nothing when the successor declines, which takes a reason', async () => {
    const id = await inService();
    const { body } = await offer(plant.manager, id, jun.personId).expect(200);
    const bare = await answer(jun, body.id, 'declined').expect(400);
    expect(bare.body.fields[0]).toMatchObject({ path: 'reason' });
    await answer(jun, body.id, 'declined', 'I have sixty already').expect(200);
    expect((await sheetOf(id)).owner.id).toBe(marco.personId);
  });

  it('that was declined is told with its reason to who offered it and whose place it was, until the next offer', async () => {
    const id = await inService();
    const declinedOf = async (agent: Agent) =>
      (await get(agent, '/handovers')).declined.filter(
        (row: { softSensorId: number }) => row.softSensorId === id,
      );
    const { body } = await offer(plant.manager, id, jun.personId).expect(200);
    await answer(jun, body.id, 'declined', 'No time before March').expect(200);
    for (const agent of [plant.manager, marco])
      expect(await declinedOf(agent)).toMatchObject([{ id: body.id, answerReason: 'No time before March' }]);
    expect(await declinedOf(jun)).toEqual([]);
    await offer(plant.manager, id, jun.personId).expect(200);
    expect(await declinedOf(marco)).toEqual([]);
  });

  it('is offered once at a time, and is taken back by who offered it or a manager', async () => {
    const id = await inService({ importanceClass: 'C', deputyId: null });
    const { body } = await offer(marco, id, jun.personId).expect(200);
    const other = await server.signedIn({ roles: [{ siteId: plant.siteId, role: 'engineer' }] });
    expect((await offer(marco, id, other.personId).expect(409)).body.detail).toContain(
      'Jun Brightwell was asked already',
    );
    await other.delete(`/api/v1/handovers/${body.id}`).expect(409);
    await plant.manager.delete(`/api/v1/handovers/${body.id}`).expect(200);
    await offer(marco, id, other.personId).expect(200);
  });

  it('to oneself is at once, and takes back an offer that waits', async () => {
    const id = await inService();
    const { body: waiting } = await offer(marco, id, jun.personId).expect(200);
    const third = await server.signedIn({
      name: 'Third',
      roles: [{ siteId: plant.siteId, role: 'engineer' }],
    });
    expect((await offer(third, id, jun.personId).expect(403)).body.detail).toContain('You may name yourself');
    const { body } = await offer(third, id, third.personId).expect(200);
    expect(body).toMatchObject({ answer: 'accepted', from: { id: marco.personId } });
    expect((await sheetOf(id)).owner.id).toBe(third.personId);
    expect((await answer(jun, waiting.id, 'accepted').expect(409)).body.detail).toContain(
      'withdrawn already',
    );
  });

  it('goes to engineers of the site, and never makes one person both', async () => {
    const id = await inService();
    const refusals = [
      [plant.manager.personId, 'owner', 'must be an engineer of the site'],
      [marco.personId, 'owner', 'is the owner already'],
      [marco.personId, 'deputy', 'must be another person than the owner'],
    ] as const;
    for (const [toId, part, message] of refusals) {
      const refused = await offer(plant.manager, id, toId, part).expect(400);
      expect(refused.body.fields).toEqual([{ path: 'toId', message: expect.stringContaining(message) }]);
    }
  });
});

describe('whoever leaves', () => {
  it('is seen with what they look after before, and leaves gaps to the managers at once', async () => {
    const leaver = await server.signedIn({
      name: 'Leaver',
      roles: [{ siteId: plant.siteId, role: 'engineer' }],
    });
    const owned = await inService({ ownerId: leaver.personId });
    const deputised = await inService({ deputyId: leaver.personId, importanceClass: 'C' });
    const seen = await get(administrator, `/people/${leaver.personId}/responsibilities`);
    expect(seen.rows).toMatchObject([
      { softSensorId: owned, part: 'owner', opensGap: true },
      { softSensorId: deputised, part: 'deputy', opensGap: false },
    ]);
    await changeRoles(leaver, { deactivated: true });
    expect(await gapsOf(owned)).toMatchObject([
      { gaps: ['owner-deactivated'], assignees: [{ id: plant.manager.personId }], mayReassign: false },
    ]);
    expect(await gapsOf(deputised)).toEqual([]);

    await offer(marco, owned, marco.personId).expect(200);
    expect(await gapsOf(owned)).toEqual([]);
    const closed = await get(plant.manager, '/duties', { softSensorId: owned, state: 'closed' });
    expect(closed.rows).toMatchObject([{ kind: 'ownership-gap', closedAs: 'filled' }]);
  });

  it('or loses the role at the site is a gap until somebody else, or they, may again', async () => {
    const id = await inService();
    await changeRoles(jun, { roles: [{ siteId: plant.siteId, role: 'reader' }] });
    expect(await gapsOf(id)).toMatchObject([{ gaps: ['deputy-no-engineer'] }]);
    // Other fields of the sheet can still be saved.
    const { fields, version } = await sheetOf(id);
    const body = { fields: { ...fields, purpose: 'Guides the burners' }, version };
    await marco.put(`/api/v1/soft-sensors/${id}`).send(body).expect(200);
    await changeRoles(jun, { roles: [{ siteId: plant.siteId, role: 'engineer' }] });
    expect(await gapsOf(id)).toEqual([]);
  });

  it('leaves everything as it was when the change fails', async () => {
    const id = await inService();
    await server.context.pool.query(
      `create function fail() returns trigger language plpgsql as 'begin raise exception ''no''; end'`,
    );
    await server.context.pool.query(
      'create trigger fail before insert on duties for each row execute function fail()',
    );
    const { rows } = await get(administrator, '/people');
    const { name, email, roles, version } = rows.find((row: { id: number }) => row.id === jun.personId);
    const body = { name, email, administrator: false, roles, version, deactivated: true };
    await administrator.put(`/api/v1/people/${jun.personId}`).send(body).expect(500);
    await server.context.pool.query('drop function fail cascade');
    await get(jun, '/handovers');
    expect(await gapsOf(id)).toEqual([]);
  });
});
