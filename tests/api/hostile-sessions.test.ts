import request from 'supertest';
import { describe, expect, it } from 'vitest';
import { createApp } from '../../server/app.ts';
import { hashToken } from '../../server/auth/token.ts';
import { sessions } from '../../server/db/schema/index.ts';
import { cookieOf } from '../support/cookie.ts';
import { origin, password, useServer } from '../support/server.ts';

const server = useServer();

const signInTo = (app = server.app) => request(app).post('/api/v1/session').set('Origin', origin);

describe('nobody is signed in by', () => {
  it('a query, a header or a made-up cookie', async () => {
    const { email, personId } = await server.signedIn({});
    const self = (query = '') => request(server.app).get(`/api/v1/self${query}`);
    for (const attempt of [
      self(`?email=${email}&password=${encodeURIComponent(password)}`),
      self().set('X-Person-Id', String(personId)),
      self().set('X-Forwarded-User', email),
      self().auth(email, password),
      self().set('Authorization', 'Bearer anything'),
      self().set('Cookie', 'cupel_session='),
      self().set('Cookie', 'cupel_session=__proto__; cupel_session=constructor'),
      self().set('Cookie', `cupel_session=${hashToken('guess')}`),
    ]) {
      const answer = await attempt.expect(200);
      expect(answer.body.self).toBeNull();
    }
  });

  it('what a dump of the sessions table holds', async () => {
    await server.signedIn({});
    for (const { id } of await server.context.db.select().from(sessions)) {
      const answer = await request(server.app).get('/api/v1/self').set('Cookie', `cupel_session=${id}`);
      expect(answer.body.self).toBeNull();
    }
  });
});

describe('a session', () => {
  it('gets an id of its own, never one that the browser brought along', async () => {
    const { email } = await server.signedIn({});
    const planted = 'cupel_session=planted-by-somebody-else';
    const answer = await signInTo().set('Cookie', planted).send({ email, password }).expect(200);
    expect(String(answer.headers['set-cookie'])).not.toContain('planted');
    const before = await request(server.app).get('/api/v1/self').set('Cookie', planted);
    expect(before.body.self).toBeNull();
  });

  it('ends when the same browser signs in anew', async () => {
    const agent = await server.signedIn({});
    const first = cookieOf(agent);
    await agent.post('/api/v1/session').send({ email: agent.email, password }).expect(200);
    const old = await request(server.app).get('/api/v1/self').set('Cookie', first);
    expect(old.body.self).toBeNull();
    const fresh = await agent.get('/api/v1/self');
    expect(fresh.body.self.email).toBe(agent.email);
  });

  it('lies in a cookie that no script reads and no other site sends, only over TLS where there is TLS', async () => {
    const { email } = await server.signedIn({});
    const plain = await signInTo().send({ email, password }).expect(200);
    expect(String(plain.headers['set-cookie'])).toMatch(/HttpOnly/);
    expect(String(plain.headers['set-cookie'])).toMatch(/SameSite=Lax/);
    expect(String(plain.headers['set-cookie'])).not.toMatch(/Domain=|Secure/);
    const config = { ...server.context.config, publicUrl: 'https://cupel.example' };
    const behindTls = createApp({ ...server.context, config });
    const secure = await request(behindTls)
      .post('/api/v1/session')
      .set('Origin', 'https://cupel.example')
      .send({ email, password })
      .expect(200);
    expect(String(secure.headers['set-cookie'])).toMatch(/HttpOnly.*Secure|Secure.*HttpOnly/);
    expect(secure.headers['strict-transport-security']).toMatch(/max-age=31536000/);
  });
});

describe('a change', () => {
  it.each([
    undefined,
    'null',
    'http://',
    'garbage',
    'file://',
    'http://elsewhere.example',
    `${origin}.elsewhere.example`,
    'http://127.0.0.1:4601',
    'http://127.0.0.1',
  ])('with the Origin %s is not made', async (from) => {
    const agent = await server.signedIn({ administrator: true });
    const asked = request(server.app).post('/api/v1/sites').set('Cookie', cookieOf(agent));
    if (from !== undefined) asked.set('Origin', from);
    const answer = await asked.send({ name: 'Smuggled Works', zone: 'UTC' });
    expect({ status: answer.status, code: answer.body.code }).toEqual({
      status: 403,
      code: 'foreign-origin',
    });
    const list = await agent.get('/api/v1/sites').expect(200);
    expect(list.text).not.toContain('Smuggled');
  });

  it('is not let in by headers that only a proxy may set', async () => {
    const agent = await server.signedIn({ administrator: true });
    const answer = await request(server.app)
      .post('/api/v1/sites')
      .set('Cookie', cookieOf(agent))
      .set('Origin', 'http://elsewhere.example')
      .set('X-Forwarded-Host', 'elsewhere.example')
      .set('X-Original-URL', '/api/v1/session')
      .send({ name: 'Smuggled Works', zone: 'UTC' });
    expect(answer.status).toBe(403);
  });
});

describe('answers', () => {
  it('are kept by no cache, framed by no page, and allow no script but our own', async () => {
    const agent = await server.signedIn({});
    for (const path of ['/api/v1/self', '/api/v1/sites', '/api/v1/nothing-here', '/api/v1/people']) {
      const { headers } = await agent.get(path);
      expect(headers['cache-control']).toBe('no-store');
      expect(headers['x-content-type-options']).toBe('nosniff');
      const policy = String(headers['content-security-policy']);
      expect(policy).toContain("frame-ancestors 'none'");
      expect(policy).toContain("script-src 'self'");
      expect(policy).not.toMatch(/unsafe|\*|http:/);
      expect(headers).not.toHaveProperty('x-powered-by');
      expect(headers).not.toHaveProperty('access-control-allow-origin');
    }
  });
});

describe('guessing', () => {
  it('is stopped after some attempts, whatever address a header claims, and says when to come back', async () => {
    const { email } = await server.signedIn({});
    const app = createApp(server.context, { signInAttempts: 3 });
    const guess = (text: string, from: string) =>
      signInTo(app).set('X-Forwarded-For', from).send({ email, password: text });
    for (const n of [1, 2, 3]) await guess('wrong', `10.0.0.${n}`).expect(401);
    const stopped = await guess('wrong', '10.0.0.4').expect(429);
    expect(stopped.headers['content-type']).toMatch(/application\/problem\+json/);
    expect(stopped.body).toMatchObject({ code: 'rate-limited', status: 429 });
    expect(stopped.body.detail).toBe(
      'Too many attempts from this address. Wait a quarter of an hour and try again.',
    );
    expect(Number(stopped.headers['retry-after'])).toBeGreaterThan(0);
    await guess(password, '10.0.0.5').expect(429);
    // Who is signed in already goes on working.
    await request(app).get('/api/v1/self').expect(200);
  });

  it('counts only failures, since a whole plant may share one address', async () => {
    const { email } = await server.signedIn({});
    const app = createApp(server.context, { signInAttempts: 3 });
    for (let n = 0; n < 6; n++) await signInTo(app).send({ email, password }).expect(200);
  });

  it('is stopped for one-time links too, and for asking for them', async () => {
    const app = createApp(server.context, { signInAttempts: 3 });
    const ask = (path: string, body: object) =>
      request(app).post(`/api/v1/password-links${path}`).set('Origin', origin).send(body);
    const token = 'x'.repeat(43);
    await ask('/read', { token }).expect(410);
    await ask('/use', { token, password: 'a new long password' }).expect(410);
    await ask('', { email: 'nobody@cupel.example' }).expect(200);
    await ask('/READ', { token }).expect(429);
  });
});
