import { beforeAll, describe, expect, it } from 'vitest';
import { persons } from '../../server/db/schema/index.ts';
import { addSiteRows, type SiteRows } from '../support/site-rows.ts';
import { type Agent, useServer } from '../support/server.ts';

const server = useServer();
let own: SiteRows;
let engineer: Agent;
let administrator: Agent;

beforeAll(async () => {
  const [someone] = await server.context.db
    .insert(persons)
    .values({ name: 'Somebody Else', email: 'somebody.else@cupel.example' })
    .returning();
  own = await addSiteRows(server.context.db, 'Tarnby', someone!.id);
  engineer = await server.signedIn({ roles: [{ siteId: own.siteId, role: 'engineer' }] });
  administrator = await server.signedIn({ administrator: true });
});

const pathOf = (field: { path: string }): string => field.path;

describe('odd ids', () => {
  it.each([
    '0',
    '-1',
    '1.0',
    '1.5',
    '1e0',
    '0x1',
    '%201',
    '1%20',
    '+1',
    '١',
    '2147483648',
    '99999999999999999999',
    'NaN',
    'null',
    '1%00',
    '1%2F..%2F2',
    '__proto__',
  ])('%s in a path is no row', async (id) => {
    for (const path of [`/sites/${id}/areas`, `/tags/${id}/series`, `/runs/${id}`]) {
      const answer = await administrator.get(`/api/v1${path}`);
      expect([400, 404]).toContain(answer.status);
      expect(answer.body.code).toMatch(/^(invalid-input|not-found)$/);
    }
  });

  it.each([0, -1, 1.5, 2_147_483_648, 9_007_199_254_740_991, 1e300, '1', true, [1], { id: 1 }])(
    '%j in a body is refused',
    async (areaId) => {
      const answer = await engineer.post(`/api/v1/sites/${own.siteId}/units`).send({ name: 'U', areaId });
      expect({ status: answer.status, code: answer.body.code }).toEqual({
        status: 400,
        code: 'invalid-input',
      });
    },
  );

  it('twice in a query, or as a group, is refused', async () => {
    for (const query of ['unitId=1&unitId=2', 'unitId[]=1', 'unitId[$ne]=1', 'unitId=1%20or%201=1']) {
      const answer = await engineer.get(`/api/v1/sites/${own.siteId}/tags?${query}`);
      const narrowed = answer.status === 200 ? answer.body.rows : null;
      // A name in brackets is simply another name: the list is the site's own, unfiltered.
      if (narrowed) expect(narrowed.every((row: { siteId: number }) => row.siteId === own.siteId)).toBe(true);
      else expect(answer.status).toBe(400);
    }
  });
});

describe('bodies that were not made by our pages', () => {
  const save = (body: string, type = 'application/json') =>
    engineer.post(`/api/v1/sites/${own.siteId}/areas`).set('Content-Type', type).send(body);

  it.each([
    ['no JSON', '{"name":'],
    ['a list', '[]'],
    ['null', 'null'],
    ['a text', '"name"'],
    ['nested a hundred thousand deep', `${'['.repeat(100_000)}${']'.repeat(100_000)}`],
    ['a name that is a group', '{"name":{"toString":"x"}}'],
    ['a name of nothing but spaces', '{"name":" \\u00a0 "}'],
    ['a name with a zero byte', '{"name":"a\\u0000b"}'],
    ['a name of 81 characters', JSON.stringify({ name: 'a'.repeat(81) })],
  ])('%s is refused as something that can’t be used', async (_what, body) => {
    const answer = await save(body);
    expect({ status: answer.status, code: answer.body.code }).toEqual({ status: 400, code: 'invalid-input' });
    expect(answer.body.detail).not.toMatch(/SyntaxError|at position|invalid byte sequence|stack/i);
  });

  it('a form or plain text, which another page could send without asking, changes nothing', async () => {
    for (const type of [
      'text/plain',
      'application/x-www-form-urlencoded',
      'application/json;charset=latin-9',
    ]) {
      const answer = await save('{"name":"Smuggled"}', type);
      expect(answer.status).toBe(400);
    }
  });

  it('a body above 2 MB is too large', async () => {
    const answer = await save(JSON.stringify({ name: 'a'.repeat(2_100_000) }));
    expect({ status: answer.status, code: answer.body.code }).toEqual({ status: 413, code: 'too-large' });
  });

  it('keys that reach for the prototype give nobody a right', async () => {
    const victim = await server.signedIn({});
    for (const key of ['__proto__', 'constructor', 'prototype']) {
      const body = `{"name":"V","email":"${victim.email}","roles":[],"version":1,"deactivated":false,"${key}":{"administrator":true,"prototype":{"administrator":true}}}`;
      const answer = await administrator
        .put(`/api/v1/people/${victim.personId}`)
        .set('Content-Type', 'application/json')
        .send(body);
      expect(answer.status).toBe(400);
      expect(answer.body.fields.map(pathOf)).toEqual(['administrator']);
    }
    expect(({} as { administrator?: boolean }).administrator).toBeUndefined();
    const self = await victim.get('/api/v1/self').expect(200);
    expect(self.body.self.administrator).toBe(false);
  });

  it('a lone half of a character pair is stored as something readable', async () => {
    const answer = await save('{"name":"Hot\\ud800end"}');
    expect([200, 400]).toContain(answer.status);
  });

  it.each([
    '0000-01-01T00:00:00Z',
    '9999-12-31T23:59:59Z',
    '2026-01-01T00:00:00+23:59',
    '2026-02-30T00:00:00Z',
    '2026-01-01T00:00:00+99:99',
  ])('the instant %s is used or refused, never a fault', async (at) => {
    const encoded = encodeURIComponent(at);
    const series = await engineer.get(`/api/v1/tags/${own.tagId}/series?from=${encoded}&to=${encoded}`);
    expect([200, 400]).toContain(series.status);
    const body = { from: '0001-01-01T00:00:00Z', to: at, reason: 'Trial' };
    const removal = await engineer.post(`/api/v1/tags/${own.tagId}/removals`).send(body);
    expect([200, 400]).toContain(removal.status);
  });
});
