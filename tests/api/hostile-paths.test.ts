import request from 'supertest';
import { beforeAll, describe, expect, it } from 'vitest';
import { createApp } from '../../server/app.ts';
import { persons } from '../../server/db/schema/index.ts';
import { addSiteRows, type SiteRows } from '../support/site-rows.ts';
import { type Agent, useServer } from '../support/server.ts';

const server = useServer();
let own: SiteRows;
let engineer: Agent;

beforeAll(async () => {
  const [someone] = await server.context.db
    .insert(persons)
    .values({ name: 'Somebody Else', email: 'somebody.else@cupel.example' })
    .returning();
  own = await addSiteRows(server.context.db, 'Tarnby', someone!.id);
  engineer = await server.signedIn({ roles: [{ siteId: own.siteId, role: 'engineer' }] });
});

describe('paths', () => {
  it.each([
    '/api/v1/sites/1/../2/areas',
    '/api/v1//sites',
    '/api/v1/sites/%2e%2e/people',
    '/api/v1/sites/1/areas;role=administrator',
    '/api/v1/%73ites/%31%2Fareas',
    '/api/../api/v1/people',
    '/api/v1/people%2F1',
    '/api/v1/sites/%E0%A4%A/areas',
  ])('%s opens nothing', async (path) => {
    const nobody = await request(server.app).get(path);
    expect([400, 401, 404]).toContain(nobody.status);
    const answer = await engineer.get(path);
    expect([400, 403, 404]).toContain(answer.status);
  });

  it('are the same in capitals or with a slash at the end, permission included', async () => {
    for (const path of ['/API/V1/PEOPLE', '/api/v1/people/', '/api/v1/People/']) {
      await request(server.app).get(path).expect(401);
      await engineer.get(path).expect(403);
    }
  });

  it('answer no method that the table doesn’t have', async () => {
    for (const method of ['patch', 'delete', 'put'] as const) {
      await engineer[method](`/api/v1/sites/${own.siteId}/areas`).send({ name: 'x' }).expect(404);
    }
    await engineer
      .post(`/api/v1/tags/${own.tagId}`)
      .set('X-HTTP-Method-Override', 'PUT')
      .send({ name: 'x', archived: true, version: 1 })
      .expect(404);
  });

  it('of files that are not there, or not below the client’s folder, are not found', async () => {
    const app = createApp(server.context, { clientFolder: 'src' });
    for (const path of [
      '/assets/nothing.js',
      '/assets/..%2f..%2fpackage.json',
      '/..%2fpackage.json',
      '/assets/%2e%2e/main.ts',
    ]) {
      const answer = await request(app).get(path);
      expect({ path, found: answer.text.includes('"dependencies"') }).toEqual({ path, found: false });
      expect(answer.status).toBe(404);
    }
  });
});

describe('a full text search', () => {
  it('takes the signs of a pattern for what they are', async () => {
    const manager = await server.signedIn({ roles: [{ siteId: own.siteId, role: 'manager' }] });
    for (const text of ['%', '_', '\\', "' or true --", 'Tarnb_', '%25']) {
      const answer = await manager.get('/api/v1/audit').query({ text }).expect(200);
      expect({ text, total: answer.body.total }).toEqual({ text, total: 0 });
    }
    const found = await manager.get('/api/v1/audit').query({ text: 'tarnb' }).expect(200);
    expect(found.body.total).toBeGreaterThan(0);
    await manager.get('/api/v1/audit').query({ text: 'a\u0000' }).expect(400);
  });
});
