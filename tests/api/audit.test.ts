import { beforeAll, describe, expect, it } from 'vitest';
import { auditEntries } from '../../server/db/schema/index.ts';
import type { AuditEntry } from '../../shared/contracts/audit.ts';
import type { EndpointSpec } from '../../shared/contracts/endpoint.ts';
import { type EndpointName, endpoints } from '../../shared/contracts/index.ts';
import { changes, findings, makeScene, type Scene } from '../support/changes.ts';
import { type Agent, password, useServer } from '../support/server.ts';

const server = useServer();
let scene: Scene;

beforeAll(async () => {
  scene = await makeScene(server);
  await server.drainJobs();
});

const sql = async <Row extends object>(text: string, values: unknown[] = []): Promise<Row[]> =>
  (await server.context.pool.query<Row>(text, values)).rows;

/** One fingerprint of every table's content; uploaded bytes aside, which come before the change they belong to. */
async function contents(): Promise<Record<string, string>> {
  const tables = await sql<{ name: string }>(
    `select format('%I.%I', n.nspname, c.relname) as name from pg_class c join pg_namespace n on n.oid = c.relnamespace
     where c.relkind = 'r' and n.nspname in ('public', 'graphile_worker')
       and c.relname not in ('files', 'file_chunks') order by 1`,
  );
  const fingerprints: Record<string, string> = {};
  for (const { name } of tables) {
    const [row] = await sql<{ is: string }>(
      `select coalesce(md5(string_agg(t::text, '|' order by t::text)), 'empty') as is from ${name} t`,
    );
    fingerprints[name] = row!.is;
  }
  return fingerprints;
}

/** A link is read with a POST so that it stands in no log; when somebody looked at the board concerns them alone. */
const noChange = ['auth.readLink', 'board.looked'];

describe('every endpoint that changes something', () => {
  it('is tried here', () => {
    const table = Object.entries(endpoints as Record<string, EndpointSpec>);
    const changing = table.filter(([name, { method }]) => method !== 'GET' && !noChange.includes(name));
    expect(Object.keys(changes).sort()).toEqual(changing.map(([name]) => name).sort());
  });

  it.each(Object.keys(changes) as EndpointName[])(
    '%s says who did what in the transaction of the change, or nothing happens',
    async (name) => {
      const found = (await findings[name]?.(scene)) ?? '';
      const send = () => changes[name]!(scene, found);
      const before = await contents();
      await sql(
        `create function fail() returns trigger language plpgsql as 'begin raise exception ''no''; end'`,
      );
      await sql('create trigger fail before insert on audit_entries for each row execute function fail()');
      const failed = await send();
      await sql('drop function fail cascade');
      expect({ status: failed.status, code: failed.body.code }).toEqual({ status: 500, code: 'unexpected' });
      expect(await contents()).toEqual(before);

      const done = await send();
      expect({ status: done.status, says: done.status === 200 ? '' : done.text }).toEqual({
        status: 200,
        says: '',
      });
      const trail = await sql<typeof auditEntries.$inferSelect>(
        'select * from audit_entries where request_id = $1',
        [done.headers['x-request-id']],
      );
      expect(trail.length).toBeGreaterThan(0);
      expect(await contents()).not.toEqual(before);
    },
  );
});

type Row = typeof auditEntries.$inferSelect;
const rowsOf = (answer: { headers: Record<string, string> }) =>
  sql<Record<string, unknown>>(
    `select person_id, person_name, site_id, from_address, action, entity, entity_id, entity_name, before, after
     from audit_entries where request_id = $1`,
    [answer.headers['x-request-id']],
  );

describe('an entry', () => {
  it('says who, at which site, from where, what it was before and after', async () => {
    const { engineer, siteId, areaId } = scene;
    const before = await engineer.get(`/api/v1/sites/${siteId}/areas`).expect(200);
    const area = before.body.rows.find(({ id }: { id: number }) => id === areaId);
    const body = { name: 'Melting', archived: true, version: area.version };
    await sql('update units set archived_at = now() where area_id = $1', [areaId]);
    const answer = await engineer.put(`/api/v1/areas/${areaId}`).send(body).expect(200);
    expect(await rowsOf(answer)).toEqual([
      {
        person_id: engineer.personId,
        person_name: 'The engineer',
        site_id: siteId,
        from_address: expect.stringMatching(/127\.0\.0\.1$/),
        action: 'change',
        entity: 'area',
        entity_id: String(areaId),
        entity_name: 'Melting',
        before: expect.objectContaining({ name: area.name, archivedAt: null, version: area.version }),
        after: expect.objectContaining({ name: 'Melting', archivedAt: expect.any(String) }),
      },
    ]);
  });

  it('takes its moment from the server’s clock', async () => {
    server.now.value = new Date('2031-05-01T10:00:00.123Z');
    const body = { name: 'Future area' };
    const answer = await scene.engineer.post(`/api/v1/sites/${scene.siteId}/areas`).send(body).expect(200);
    server.now.value = null;
    const [row] = await sql<Row>('select at from audit_entries where request_id = $1', [
      answer.headers['x-request-id'],
    ]);
    expect(row!.at.toISOString()).toBe('2031-05-01T10:00:00.123Z');
  });

  it('goes with its change when the commit fails', async () => {
    await sql(
      `create function fail_late() returns trigger language plpgsql as 'begin raise exception ''no''; end'`,
    );
    await sql(
      'create constraint trigger fail_late after insert on areas deferrable initially deferred for each row execute function fail_late()',
    );
    const before = await contents();
    const body = { name: 'Never was' };
    await scene.engineer.post(`/api/v1/sites/${scene.siteId}/areas`).send(body).expect(500);
    expect(await contents()).toEqual(before);
    await sql('drop function fail_late cascade');
  });

  it('is not left by what was refused or only looked at', async () => {
    const before = await contents();
    const { administrator, engineer, siteId, areaId } = scene;
    await engineer
      .put(`/api/v1/areas/${areaId}`)
      .send({ name: 'x', archived: false, version: 99 })
      .expect(409);
    await engineer.post(`/api/v1/sites/${siteId}/areas`).send({ name: ' ' }).expect(400);
    await engineer.post('/api/v1/sites').send({ name: 'x', zone: 'UTC' }).expect(403);
    await administrator.get('/api/v1/people').expect(200);
    await administrator.get('/api/v1/audit').expect(200);
    expect(await contents()).toEqual(before);
  });

  it('holds no password and no hash of one', async () => {
    const [found] = await sql<{ n: number }>(
      `select count(*)::int as n from audit_entries t where t::text ~ 'argon2' or strpos(t::text, $1) > 0`,
      [password],
    );
    expect(found).toEqual({ n: 0 });
  });

  it.each([
    `update audit_entries set person_name = 'Somebody else'`,
    `update audit_entries set before = null where id = 1`,
    'delete from audit_entries',
    'truncate audit_entries',
    'truncate audit_entries, sites cascade',
  ])('stays, whatever is tried: %s', async (statement) => {
    const before = await contents();
    await expect(sql(statement)).rejects.toMatchObject({ code: '23001' });
    expect(await contents()).toEqual(before);
  });
});

describe('the list of entries', () => {
  const list = async (agent: Agent, query: object = {}) =>
    (await agent.get('/api/v1/audit').query(query).expect(200)).body as { rows: AuditEntry[]; total: number };

  it('shows a manager the own site and an administrator everything, newest first', async () => {
    const manager = await server.signedIn({ roles: [{ siteId: scene.siteId, role: 'manager' }] });
    const own = await list(manager, { perPage: 200 });
    expect(own.total).toBeGreaterThan(5);
    expect(new Set(own.rows.map(({ siteId }) => siteId))).toEqual(new Set([scene.siteId]));
    const all = await list(scene.administrator, { perPage: 200 });
    expect(all.rows.some(({ siteId }) => siteId === null)).toBe(true);
    const times = all.rows.map(({ at }) => at);
    expect(times).toEqual([...times].sort().reverse());
  });

  it('is empty for a reader, an engineer and a technician', async () => {
    for (const role of ['reader', 'engineer', 'technician'] as const) {
      const agent = await server.signedIn({ roles: [{ siteId: scene.siteId, role }] });
      expect(await list(agent)).toEqual({ rows: [], total: 0 });
    }
  });

  it('is narrowed by words, by kind and by thing, and paged', async () => {
    const { administrator, siteId, areaId } = scene;
    const kind = await list(administrator, { entity: 'area', entityId: String(areaId) });
    expect(kind.total).toBeGreaterThan(0);
    expect(kind.rows.every((row) => row.entity === 'area' && row.entityId === String(areaId))).toBe(true);
    const words = await list(administrator, { text: 'FUTURE ar', siteId });
    expect(words.rows.map(({ entityName }) => entityName)).toEqual(['Future area']);
    const first = await list(administrator, { perPage: 2, page: 1 });
    const second = await list(administrator, { perPage: 2, page: 2 });
    const together = await list(administrator, { perPage: 4, page: 1 });
    expect([...first.rows, ...second.rows]).toEqual(together.rows);
    expect(first.total).toBe(together.total);
  });
});
