import { beforeAll, describe, expect, it } from 'vitest';
import { dirtyHours, persons, readingHours } from '../../server/db/schema/index.ts';
import type { Tag } from '../../shared/contracts/tags.ts';
import { addSiteRows, type SiteRows } from '../support/site-rows.ts';
import { type Agent, useServer } from '../support/server.ts';

const server = useServer();
let rows: SiteRows;
let engineer: Agent;

beforeAll(async () => {
  const [someone] = await server.context.db
    .insert(persons)
    .values({ name: 'Somebody Else', email: 'somebody.else@cupel.example' })
    .returning();
  rows = await addSiteRows(server.context.db, 'Tarnby', someone!.id);
  engineer = await server.signedIn({ roles: [{ siteId: rows.siteId, role: 'engineer' }] });
});

const fields = (name: string, own: object = {}) => ({
  name,
  description: '',
  unit: '°C',
  unitId: rows.unitId,
  rangeLow: 0,
  rangeHigh: 600,
  ...own,
});
const add = (...tags: object[]) => engineer.post(`/api/v1/sites/${rows.siteId}/tags`).send({ tags });
const list = async (): Promise<Tag[]> =>
  (await engineer.get(`/api/v1/sites/${rows.siteId}/tags`).expect(200)).body.rows;
const pathsOf = (answer: { body: { fields: { path: string }[] } }) =>
  answer.body.fields.map(({ path }) => path);

describe('adding tags', () => {
  it('takes a whole list at once, all or none', async () => {
    const { body } = await add(fields('FI-1'), fields('FI-2', { unitId: null, rangeLow: null })).expect(200);
    expect(body.rows.map(({ name }: Tag) => name)).toEqual(['FI-1', 'FI-2']);
    expect(body.rows[0]).toMatchObject({ kind: 'measured', readings: 0, lastAt: null, unitName: 'Tarnby' });
    await add(fields('FI-3'), fields('fi-1')).expect(400);
    expect((await list()).map(({ name }) => name)).not.toContain('FI-3');
  });

  it('names every row at fault: known already, twice in the list, range upside down', async () => {
    const answer = await add(fields('FI-1'), fields('FI-9'), fields('fi-9')).expect(400);
    expect(pathsOf(answer)).toEqual(['tags.0.name', 'tags.2.name']);
    const upsideDown = await add(fields('FI-7'), fields('FI-8', { rangeLow: 5, rangeHigh: 5 })).expect(400);
    expect(pathsOf(upsideDown)).toEqual(['tags.1.rangeHigh']);
    const missing = await add(fields(' '), fields('x'.repeat(61))).expect(400);
    expect(pathsOf(missing)).toEqual(['tags.0.name', 'tags.1.name']);
  });

  it('takes 500 and no more', async () => {
    const many = Array.from({ length: 501 }, (_, n) => fields(`XI-${n}`));
    await add(...many).expect(400);
    const { body } = await add(...many.slice(1)).expect(200);
    expect(body.rows).toHaveLength(500);
  });
});

describe('changing a tag', () => {
  it('renames, moves, archives and takes back', async () => {
    const { body } = await add(fields('PI-1')).expect(200);
    const tag = body.rows[0] as Tag;
    const put = (own: object) =>
      engineer.put(`/api/v1/tags/${tag.id}`).send({ ...fields('PI-1'), archived: false, version: 1, ...own });
    const gone = await put({ name: 'PI-2', unitId: null, archived: true }).expect(200);
    expect(gone.body).toMatchObject({
      name: 'PI-2',
      unitName: null,
      archivedAt: expect.any(String),
      version: 2,
    });
    const taken = await put({ name: 'fi-1', version: 2 }).expect(409);
    expect(pathsOf(taken)).toEqual(['name']);
    const back = await put({ name: 'PI-2', version: 2 }).expect(200);
    expect(back.body.archivedAt).toBeNull();
  });

  it('leaves the tag of an estimate to its data sheet', async () => {
    const estimate = (await list()).find(({ kind }) => kind === 'estimate')!;
    const body = { ...fields('Renamed'), archived: false, version: estimate.version };
    const answer = await engineer.put(`/api/v1/tags/${estimate.id}`).send(body).expect(409);
    expect(answer.body.detail).toBe(
      'Tarnby TY holds the estimate of a soft sensor. Change it on its data sheet.',
    );
  });
});

describe('removing readings', () => {
  const remove = (body: object) => engineer.post(`/api/v1/tags/${rows.tagId}/removals`).send(body);
  const day = { from: '2026-11-01T00:00:00Z', to: '2026-11-02T00:00:00Z' };

  it('needs a reason and a period in order', async () => {
    expect(pathsOf(await remove({ ...day, reason: ' ' }).expect(400))).toEqual(['reason']);
    const turned = { from: day.to, to: day.from, reason: 'Trial' };
    expect(pathsOf(await remove(turned).expect(400))).toEqual(['to']);
    expect(pathsOf(await remove({ from: 'yesterday', to: day.to, reason: 'x' }).expect(400))).toEqual([
      'from',
    ]);
  });

  it('takes out what lies between the instants, both ends included, and counts anew', async () => {
    const one = { from: '2026-11-01T07:00:00Z', to: '2026-11-01T07:00:00Z' };
    const { body } = await remove({ ...one, reason: 'Thermocouple was out for a check' }).expect(200);
    expect(body).toEqual({ removed: 1 });
    const tag = (await list()).find(({ id }) => id === rows.tagId)!;
    expect(tag).toMatchObject({ readings: 1, lastAt: '2026-11-01T06:00:00.000Z', lastValue: 300 });
  });

  it('marks only the hours that lost readings, however long the period', async () => {
    await server.context.db.delete(dirtyHours);
    const ever = { from: '0001-01-01T00:00:00Z', to: '9999-12-31T23:59:59Z' };
    const { body } = await remove({ ...ever, reason: 'Wrong tag' }).expect(200);
    expect(body).toEqual({ removed: 1 });
    const dirty = await server.context.db.select().from(dirtyHours);
    expect(dirty.map(({ hour }) => hour.toISOString())).toEqual(['2026-11-01T06:00:00.000Z']);
    expect((await list()).find(({ id }) => id === rows.tagId)).toMatchObject({ readings: 0, lastAt: null });
    expect(await server.context.db.select().from(readingHours)).toEqual([]);
  });

  it('says 0 where there were none, and still keeps the reason', async () => {
    const { body } = await remove({ ...day, reason: 'To be sure' }).expect(200);
    expect(body).toEqual({ removed: 0 });
    const { rows: trail } = await server.context.pool.query(
      `select reason, before ->> 'readings' as readings from audit_entries
       where entity = 'readings' order by id desc limit 1`,
    );
    expect(trail).toEqual([{ reason: 'To be sure', readings: '0' }]);
  });

  it('is not for a technician, a manager or an administrator', async () => {
    const others = (['technician', 'manager', 'reader'] as const).map((role) => ({
      roles: [{ siteId: rows.siteId, role }],
    }));
    for (const who of [...others, { administrator: true }]) {
      const agent = await server.signedIn(who);
      await agent.post(`/api/v1/tags/${rows.tagId}/removals`).send({}).expect(403);
    }
  });
});
