import { beforeAll, describe, expect, it } from 'vitest';
import type { Area, Site, Unit } from '../../shared/contracts/sites.ts';
import { type Agent, useServer } from '../support/server.ts';

const server = useServer();
let administrator: Agent;
let engineer: Agent;
let site: Site;

const add = async <T>(agent: Agent, path: string, body: object): Promise<T> =>
  (await agent.post(`/api/v1${path}`).send(body).expect(200)).body;

beforeAll(async () => {
  administrator = await server.signedIn({ administrator: true });
  site = await add(administrator, '/sites', { name: 'Tarnby Works', zone: 'Europe/Copenhagen' });
  engineer = await server.signedIn({ roles: [{ siteId: site.id, role: 'engineer' }] });
});

const change = (agent: Agent, path: string, row: object, own: object) =>
  agent.put(`/api/v1${path}`).send({ archived: false, ...row, ...own });

describe('a site', () => {
  it('has a name of its own, whatever the capitals, said beside the field', async () => {
    const body = { name: 'TARNBY works', zone: 'UTC' };
    const answer = await administrator.post('/api/v1/sites').send(body).expect(409);
    expect(answer.body.fields).toEqual([
      { path: 'name', message: 'There is a site with this name already. Choose another name.' },
    ]);
  });

  it.each(['', 'Copenhagen', 'Europe/Nowhere', '../etc/passwd', 'Europe/Copenhagen '])(
    'does not take “%s” for a time zone',
    async (zone) => {
      const answer = await administrator.post('/api/v1/sites').send({ name: 'Elsewhere', zone }).expect(400);
      expect(answer.body.fields).toEqual([
        { path: 'zone', message: 'This is no time zone. One looks like Europe/Copenhagen.' },
      ]);
    },
  );

  it('disappears for its people when archived, and is back with their roles when taken back', async () => {
    const mill = await add<Site>(administrator, '/sites', {
      name: 'Ostrander Mill',
      zone: 'America/Toronto',
    });
    const reader = await server.signedIn({ roles: [{ siteId: mill.id, role: 'reader' }] });
    const archived = await change(administrator, `/sites/${mill.id}`, mill, { archived: true }).expect(200);
    expect(archived.body.archivedAt).not.toBeNull();
    await reader.get(`/api/v1/sites/${mill.id}/areas`).expect(404);
    expect((await reader.get('/api/v1/sites').expect(200)).body.rows).toEqual([]);
    const all = await administrator.get('/api/v1/sites').expect(200);
    expect(all.body.rows.map(({ name }: Site) => name)).toContain('Ostrander Mill');
    await change(administrator, `/sites/${mill.id}`, archived.body, { archived: false }).expect(200);
    await reader.get(`/api/v1/sites/${mill.id}/areas`).expect(200);
  });

  it('keeps the moment it was archived when it is renamed later', async () => {
    const old = await add<Site>(administrator, '/sites', { name: 'Old Works', zone: 'UTC' });
    server.now.value = new Date('2026-03-01T12:00:00Z');
    const first = await change(administrator, `/sites/${old.id}`, old, { archived: true }).expect(200);
    server.now.value = new Date('2026-04-01T12:00:00Z');
    const body = { name: 'Very Old Works', archived: true };
    const second = await change(administrator, `/sites/${old.id}`, first.body, body).expect(200);
    server.now.value = null;
    expect(second.body.archivedAt).toBe('2026-03-01T12:00:00.000Z');
  });
});

describe('the shifts of a site', () => {
  const usual = [
    { name: 'Early', from: '06:00' },
    { name: 'Late', from: '14:00' },
    { name: 'Night', from: '22:00' },
  ];
  const own = async (name: string) => add<Site>(administrator, '/sites', { name, zone: 'UTC' });
  const shift = (from: string, name: string) => ({ name, from });

  it('are three of eight hours until somebody says otherwise, and kept in order of time', async () => {
    const mill = await own('Shift Mill');
    expect(mill.shifts).toEqual(usual);
    const shifts = [shift('19:00', ' Night '), shift('07:00', 'Day')];
    const changed = await change(administrator, `/sites/${mill.id}`, mill, { shifts }).expect(200);
    expect(changed.body.shifts).toEqual([shift('07:00', 'Day'), shift('19:00', 'Night')]);
    const { shifts: _shifts, ...without } = changed.body;
    const renamed = await change(administrator, `/sites/${mill.id}`, without, { name: 'Shift Mill 2' });
    expect(renamed.body.shifts).toEqual(changed.body.shifts);
    const { body } = await administrator.get('/api/v1/audit').query({ siteId: mill.id }).expect(200);
    const saved = body.rows.find(({ before }: { before: Site | null }) => before?.version === 1);
    expect([saved.before.shifts, saved.after.shifts]).toEqual([usual, changed.body.shifts]);
  });

  it.each([
    [[], 'shifts', 'one shift at least'],
    [Array.from({ length: 7 }, (_, n) => shift(`0${n}:00`, `S${n}`)), 'shifts', '6 shifts at most'],
    [[shift('06:00', 'Day'), shift('18:00', 'day')], 'shifts.1.name', 'called day already'],
    [[shift('06:00', 'Day'), shift('06:00', 'Night')], 'shifts.1.from', 'begins at 06:00 already'],
    [[shift('6:00', 'Day')], 'shifts.0.from', 'A time looks like 06:00.'],
    [[shift('24:00', 'Day')], 'shifts.0.from', 'A time looks like 06:00.'],
    [[shift('06:00', '  ')], 'shifts.0.name', 'Name the shift.'],
  ])('are refused beside what is wrong: %j', async (shifts, path, message) => {
    const answer = await change(administrator, `/sites/${site.id}`, site, { shifts }).expect(400);
    expect(answer.body.fields).toEqual([{ path, message: expect.stringContaining(message) }]);
  });
});

describe('areas and units', () => {
  it('are added, renamed and moved by an engineer of the site', async () => {
    const hot = await add<Area>(engineer, `/sites/${site.id}/areas`, { name: 'Hot end' });
    const cold = await add<Area>(engineer, `/sites/${site.id}/areas`, { name: 'Cold end' });
    const unit = await add<Unit>(engineer, `/sites/${site.id}/units`, { name: 'Lehr 1', areaId: hot.id });
    expect(unit.areaName).toBe('Hot end');
    const moved = await change(engineer, `/units/${unit.id}`, unit, {
      name: 'Lehr 2',
      areaId: cold.id,
    }).expect(200);
    expect(moved.body).toMatchObject({ name: 'Lehr 2', areaName: 'Cold end', version: 2 });
    const again = await engineer
      .post(`/api/v1/sites/${site.id}/units`)
      .send({ name: 'LEHR 2', areaId: cold.id })
      .expect(409);
    expect(again.body.fields[0].path).toBe('name');
    await add(engineer, `/sites/${site.id}/units`, { name: 'Lehr 2', areaId: hot.id });
  });

  it('leave no unit behind in an archived area', async () => {
    const area = await add<Area>(engineer, `/sites/${site.id}/areas`, { name: 'Batch house' });
    const unit = await add<Unit>(engineer, `/sites/${site.id}/units`, { name: 'Mixer 1', areaId: area.id });
    const refused = await change(engineer, `/areas/${area.id}`, area, { archived: true }).expect(409);
    expect(refused.body.detail).toBe('Batch house still has 1 unit. Move or archive it first.');
    const gone = await change(engineer, `/units/${unit.id}`, unit, { archived: true }).expect(200);
    await change(engineer, `/areas/${area.id}`, area, { archived: true }).expect(200);
    const back = await change(engineer, `/units/${unit.id}`, gone.body, {}).expect(400);
    expect(back.body.fields).toEqual([
      {
        path: 'areaId',
        message: 'The area Batch house is archived. Take it back first, or choose another.',
      },
    ]);
    const into = { name: 'Mixer 2', areaId: area.id };
    await engineer.post(`/api/v1/sites/${site.id}/units`).send(into).expect(400);
    // An archived unit may still be renamed where it is.
    await change(engineer, `/units/${unit.id}`, gone.body, { name: 'Mixer 0', archived: true }).expect(200);
  });
});
