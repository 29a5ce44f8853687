import request from 'supertest';
import { describe, expect, it } from 'vitest';
import { hashToken } from '../../server/auth/token.ts';
import { localMails, sessions } from '../../server/db/schema/index.ts';
import { origin, password, useServer } from '../support/server.ts';

const server = useServer();

describe('signing in', () => {
  it('lets a person in and out, and an old cookie opens nothing', async () => {
    const agent = await server.signedIn({ name: 'Marco Castellane' });
    const self = await agent.get('/api/v1/self').expect(200);
    expect(self.body.self.name).toBe('Marco Castellane');
    const cookie = (
      agent.jar.getCookies({ domain: '127.0.0.1', path: '/', secure: false, script: false }) as unknown as {
        toValueString(): string;
      }[]
    )[0]!.toValueString();
    await agent.delete('/api/v1/session').expect(200);
    const replayed = await request(server.app).get('/api/v1/self').set('Cookie', cookie).expect(200);
    expect(replayed.body.self).toBeNull();
  });

  it('keeps only the SHA-256 of a session id', async () => {
    const agent = await server.signedIn({});
    const cookie = (
      agent.jar.getCookies({ domain: '127.0.0.1', path: '/', secure: false, script: false }) as unknown as {
        value: string;
      }[]
    )[0]!.value;
    const rows = await server.context.db.select().from(sessions);
    expect(rows.map((row) => row.id)).toContain(hashToken(cookie));
    expect(rows.map((row) => row.id)).not.toContain(cookie);
  });

  it('says the same of a wrong password and of an unknown address', async () => {
    const agent = await server.signedIn({});
    const wrong = await request(server.app)
      .post('/api/v1/session')
      .set('Origin', origin)
      .send({ email: agent.email, password: 'wrong' })
      .expect(401);
    const unknown = await request(server.app)
      .post('/api/v1/session')
      .set('Origin', origin)
      .send({ email: 'nobody@cupel.example', password })
      .expect(401);
    expect({ ...wrong.body, requestId: '' }).toEqual({ ...unknown.body, requestId: '' });
    expect(wrong.body.fields[0].path).toBe('password');
  });

  it('refuses a change from another origin', async () => {
    await request(server.app)
      .post('/api/v1/session')
      .set('Origin', 'http://elsewhere.example')
      .send({})
      .expect(403);
    await request(server.app).post('/api/v1/session').send({}).expect(403);
  });
});

describe('one-time links', () => {
  it('sets a new password once, ends other sessions, and never tells whether an address exists', async () => {
    const agent = await server.signedIn({});
    const ask = (email: string) =>
      request(server.app).post('/api/v1/password-links').set('Origin', origin).send({ email });
    const known = await ask(agent.email).expect(200);
    const unknown = await ask('nobody@cupel.example').expect(200);
    expect(known.body).toEqual(unknown.body);
    await server.drainJobs();
    const mails = await server.context.db.select().from(localMails);
    const raw = mails.map((mail) => mail.raw.toString('utf8')).find((text) => text.includes(agent.email))!;
    const token = /set-password#([\w-]+)/.exec(raw.replaceAll('=\r\n', ''))![1]!;
    const use = () =>
      request(server.app)
        .post('/api/v1/password-links/use')
        .set('Origin', origin)
        .send({ token, password: 'another long password' });
    await use().expect(200);
    await use().expect(410);
    const self = await agent.get('/api/v1/self').expect(200);
    expect(self.body.self).toBeNull();
    await request(server.app)
      .post('/api/v1/session')
      .set('Origin', origin)
      .send({ email: agent.email, password: 'another long password' })
      .expect(200);
  });
});
