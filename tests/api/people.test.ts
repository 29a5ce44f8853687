import { eq } from 'drizzle-orm';
import request from 'supertest';
import { beforeAll, describe, expect, it } from 'vitest';
import { persons, sites } from '../../server/db/schema/index.ts';
import type { Person } from '../../shared/contracts/people.ts';
import { cookieOf } from '../support/cookie.ts';
import { lettersTo, tokenIn } from '../support/letters.ts';
import { type Agent, origin, password, useServer } from '../support/server.ts';

const server = useServer();
let administrator: Agent;
let siteId: number;

beforeAll(async () => {
  administrator = await server.signedIn({ name: 'Ada Minster', administrator: true });
  const site = await administrator
    .post('/api/v1/sites')
    .send({ name: 'Tarnby Works', zone: 'UTC' })
    .expect(200);
  siteId = site.body.id;
});

let count = 0;
const newcomer = (own: object = {}) => ({
  name: 'Tove Halbrook',
  email: `tove${++count}@tarnby.example`,
  administrator: false,
  roles: [{ siteId, role: 'technician' }],
  ...own,
});
const add = async (own: object = {}): Promise<Person> =>
  (await administrator.post('/api/v1/people').send(newcomer(own)).expect(200)).body;
const change = (person: Person, own: object) => {
  const { name, email, administrator: all, roles, version } = person;
  const body = { name, email, administrator: all, roles, version, deactivated: false, ...own };
  return administrator.put(`/api/v1/people/${person.id}`).send(body);
};
const post = (path: string, body: object) =>
  request(server.app).post(`/api/v1${path}`).set('Origin', origin).send(body);
const setPassword = (token: string) => post('/password-links/use', { token, password });
const fieldsOf = (answer: request.Response): Record<string, string> =>
  Object.fromEntries(
    answer.body.fields.map((field: { path: string; message: string }) => [field.path, field.message]),
  );

describe('a new person', () => {
  it('gets a letter with a link that sets a password, signs in, and works once', async () => {
    const person = await add();
    expect(person).toMatchObject({ hasPassword: false, deactivatedAt: null, version: 1 });
    await post('/session', { email: person.email, password }).expect(401);
    const [letter] = await lettersTo(server, person.email);
    expect(letter!.subject).toBe('Set your password for Cupel');
    const read = await post('/password-links/read', { token: tokenIn(letter!) }).expect(200);
    expect(read.body).toEqual({ purpose: 'set-password', name: person.name, email: person.email });
    const self = await setPassword(tokenIn(letter!)).expect(200);
    expect(self.body.roles).toEqual([{ siteId, role: 'technician' }]);
    await setPassword(tokenIn(letter!)).expect(410);
    await post('/session', { email: person.email.toUpperCase(), password }).expect(200);
  });

  it('may be called anything: markup in a name stays text in the letter', async () => {
    const name = `<b>Bo</b> "<img src=x onerror=alert(1)>" & 'Søn'`;
    const person = await add({ name });
    const [letter] = await lettersTo(server, person.email);
    expect(letter!.text).toContain(`Hello ${name},`);
    expect(letter!.html).toContain(
      '&lt;b&gt;Bo&lt;/b&gt; &quot;&lt;img src=x onerror=alert(1)&gt;&quot; &amp; &#39;Søn&#39;',
    );
    expect(letter!.html).not.toMatch(/<b>|<img/);
    expect(letter!.html).toContain(`href="${server.context.config.publicUrl}/set-password#`);
  });

  it('may be tried for only once when two browsers use the link at the same moment', async () => {
    const person = await add();
    const token = tokenIn((await lettersTo(server, person.email))[0]!);
    const answers = await Promise.all([setPassword(token), setPassword(token)]);
    expect(answers.map(({ status }) => status).sort()).toEqual([200, 410]);
  });

  it.each([
    ['set-password', 7 * 24],
    ['reset-password', 2],
  ] as const)('has the hours that a %s letter promises, and not one more', async (purpose, hours) => {
    const person = await add();
    if (purpose === 'reset-password') {
      await setPassword(tokenIn((await lettersTo(server, person.email))[0]!)).expect(200);
      await administrator.post(`/api/v1/people/${person.id}/password-links`).send({}).expect(200);
    }
    const letter = (await lettersTo(server, person.email)).at(-1)!;
    const now = Date.now();
    server.now.value = new Date(now + hours * 3_600_000 - 60_000);
    await post('/password-links/read', { token: tokenIn(letter) }).expect(200);
    server.now.value = new Date(now + hours * 3_600_000 + 60_000);
    await post('/password-links/read', { token: tokenIn(letter) }).expect(410);
    await setPassword(tokenIn(letter)).expect(410);
    server.now.value = null;
    expect(letter.text).toContain(hours >= 48 ? `${hours / 24} days` : `${hours} hours`);
  });

  it('is served by the newest link alone', async () => {
    const person = await add();
    await lettersTo(server, person.email);
    await administrator.post(`/api/v1/people/${person.id}/password-links`).send({}).expect(200);
    const [older, newer] = await lettersTo(server, person.email);
    await setPassword(tokenIn(older!)).expect(410);
    await setPassword(tokenIn(newer!)).expect(200);
  });
});

describe('an address', () => {
  it('that somebody has already is refused beside its field, whatever its capitals', async () => {
    const person = await add();
    const again = await administrator
      .post('/api/v1/people')
      .send(newcomer({ email: person.email.toUpperCase() }))
      .expect(400);
    expect(fieldsOf(again)).toEqual({ email: 'Tove Halbrook has this address already.' });
    const other = await add();
    const changed = await change(other, { email: person.email }).expect(400);
    expect(fieldsOf(changed)).toHaveProperty('email');
  });

  it('taken by two requests at once goes to one of them', async () => {
    const body = newcomer();
    const answers = await Promise.all([1, 2].map(() => administrator.post('/api/v1/people').send(body)));
    expect(answers.map(({ status }) => status).sort()).toEqual([
      200,
      expect.toSatisfy((s) => s === 400 || s === 409),
    ]);
    expect(fieldsOf(answers.find(({ status }) => status !== 200)!)).toHaveProperty('email');
  });

  it('that is changed makes links and letters to the old one worthless', async () => {
    const person = await add();
    const token = tokenIn((await lettersTo(server, person.email))[0]!);
    await administrator.post(`/api/v1/people/${person.id}/password-links`).send({}).expect(200);
    await change(person, { email: `new-${person.email}` }).expect(200);
    await setPassword(token).expect(410);
    expect(await lettersTo(server, person.email)).toHaveLength(1);
    const { body } = await administrator.get('/api/v1/mails').expect(200);
    expect(body.rows[0]).toMatchObject({
      to: person.email,
      state: 'failed',
      lastError: 'Not sent: the person has another address now.',
    });
  });
});

describe('deactivating', () => {
  it('ends every session at once, and no link or password lets the person in again', async () => {
    const agent = await server.signedIn({ roles: [{ siteId, role: 'reader' }] });
    const list = await administrator.get('/api/v1/people').expect(200);
    const person = list.body.rows.find((row: Person) => row.id === agent.personId) as Person;
    await post('/password-links', { email: agent.email }).expect(200);
    const token = tokenIn((await lettersTo(server, agent.email))[0]!);
    await agent.get(`/api/v1/sites/${siteId}/areas`).expect(200);
    const cookie = cookieOf(agent);
    const gone = await change(person, { deactivated: true }).expect(200);
    await agent.get(`/api/v1/sites/${siteId}/areas`).expect(401);
    await post('/session', { email: agent.email, password }).expect(401);
    await setPassword(token).expect(410);
    await post('/password-links', { email: agent.email }).expect(200);
    expect(await lettersTo(server, agent.email)).toHaveLength(1);
    const refused = await administrator
      .post(`/api/v1/people/${person.id}/password-links`)
      .send({})
      .expect(409);
    expect(refused.body.detail).toContain('is deactivated');
    await change(gone.body, {}).expect(200);
    const revived = await request(server.app).get('/api/v1/self').set('Cookie', cookie).expect(200);
    expect(revived.body.self).toBeNull();
    await setPassword(token).expect(410);
    await post('/session', { email: agent.email, password }).expect(200);
  });
});

describe('the last administrator who can sign in', () => {
  it('can’t be demoted or deactivated, even by two at the same moment', async () => {
    const list = await administrator.get('/api/v1/people').expect(200);
    const ada = list.body.rows.find((row: Person) => row.id === administrator.personId) as Person;
    const says = { administrator: expect.stringContaining('last administrator') };
    // An administrator who has never set a password could let nobody in.
    const silent = await add({ administrator: true });
    expect(fieldsOf(await change(ada, { administrator: false }).expect(400))).toEqual(says);
    expect(fieldsOf(await change(ada, { deactivated: true }).expect(400))).toEqual(says);
    await setPassword(tokenIn((await lettersTo(server, silent.email))[0]!)).expect(200);
    const both = await Promise.all([
      change(ada, { administrator: false }),
      change(silent, { administrator: false }),
    ]);
    expect(both.filter(({ status }) => status === 200)).toHaveLength(1);
    const { rows } = await server.context.pool.query(
      'select count(*)::int as n from persons where administrator',
    );
    expect(rows).toEqual([{ n: 1 }]);
    await server.context.db.update(persons).set({ administrator: true }).where(eq(persons.id, ada.id));
  });
});

describe('roles', () => {
  it('count from the next request on', async () => {
    const agent = await server.signedIn({});
    const list = await administrator.get('/api/v1/people').expect(200);
    const person = list.body.rows.find((row: Person) => row.id === agent.personId) as Person;
    await agent.get(`/api/v1/sites/${siteId}/areas`).expect(404);
    const given = await change(person, { administrator: false, roles: [{ siteId, role: 'reader' }] }).expect(
      200,
    );
    await agent.get(`/api/v1/sites/${siteId}/areas`).expect(200);
    await agent.post(`/api/v1/sites/${siteId}/areas`).send({ name: 'Hot end' }).expect(403);
    await change(given.body, { roles: [] }).expect(200);
    await agent.get(`/api/v1/sites/${siteId}/areas`).expect(404);
  });

  it('are not given at a site that is archived or not there; those held at an archived site stay', async () => {
    const closed = await administrator
      .post('/api/v1/sites')
      .send({ name: 'Old Mill', zone: 'UTC' })
      .expect(200);
    const held = { siteId: closed.body.id, role: 'manager' };
    const person = await add({ roles: [held] });
    await server.context.db.update(sites).set({ archivedAt: new Date() }).where(eq(sites.id, held.siteId));
    for (const siteId of [held.siteId, 999_999]) {
      const refused = await change(person, { roles: [{ siteId, role: 'reader' }] }).expect(400);
      expect(fieldsOf(refused)).toHaveProperty('roles');
    }
    const changed = await change(person, { roles: [{ siteId, role: 'reader' }] }).expect(200);
    expect(changed.body.roles).toEqual([{ siteId, role: 'reader' }]);
    await server.context.db.update(sites).set({ archivedAt: null }).where(eq(sites.id, held.siteId));
    const list = await administrator.get('/api/v1/people').expect(200);
    const now = list.body.rows.find((row: Person) => row.id === person.id) as Person;
    expect(now.roles).toEqual(expect.arrayContaining([held, { siteId, role: 'reader' }]));
  });

  it('at a site are shown there with the active people who hold them', async () => {
    const person = await add({
      roles: [
        { siteId, role: 'manager' },
        { siteId, role: 'engineer' },
      ],
    });
    const there = async () =>
      (await administrator.get(`/api/v1/sites/${siteId}/people`).expect(200)).body.rows;
    expect(await there()).toContainEqual({
      id: person.id,
      name: person.name,
      roles: ['engineer', 'manager'],
    });
    await change(person, { deactivated: true }).expect(200);
    expect((await there()).map((row: { id: number }) => row.id)).not.toContain(person.id);
  });
});
