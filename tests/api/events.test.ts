import { eq } from 'drizzle-orm';
import { beforeAll, describe, expect, it } from 'vitest';
import { units } from '../../server/db/schema/index.ts';
import type { EventFile, PlantEvent } from '../../shared/contracts/events.ts';
import type { PairedError } from '../../shared/contracts/judging.ts';
import {
  at,
  get,
  hour,
  makePlant,
  modelOf,
  type Plant,
  putInService,
  writeInputs,
  writeSamples,
} from '../support/plant.ts';
import { type Agent, useServer } from '../support/server.ts';

const server = useServer();
let plant: Plant;
let technician: Agent;
let reader: Agent;

beforeAll(async () => {
  plant = await makePlant(server);
  const { siteId } = plant;
  technician = await server.signedIn({ name: 'Tove Halbrook', roles: [{ siteId, role: 'technician' }] });
  reader = await server.signedIn({ roles: [{ siteId, role: 'reader' }] });
  server.now.value = at(1000);
});

/** A unit of its own, so that no test meets the stops of another. */
async function unitNamed(name: string): Promise<number> {
  const { body } = await plant.engineer.get(`/api/v1/sites/${plant.siteId}/areas`);
  const answer = await plant.engineer
    .post(`/api/v1/sites/${plant.siteId}/units`)
    .send({ name, areaId: body.rows[0].id })
    .expect(200);
  return answer.body.id;
}

const record = (body: object, agent = technician) =>
  agent.post(`/api/v1/sites/${plant.siteId}/events`).send(body);
const list = (query: object = {}): Promise<{ rows: PlantEvent[]; total: number; stopped: object[] }> =>
  get(reader, `/sites/${plant.siteId}/events`, query);
const send = (text: string, query: object = {}, agent = technician) =>
  agent
    .post(`/api/v1/sites/${plant.siteId}/event-files`)
    .query(query)
    .attach('file', Buffer.from(text), 'events.csv');
const iso = (k: number) => at(k).toISOString();
const ofUnit = (unitId: number, kind: string, k: number, own: object = {}) => ({
  unitId,
  kind,
  at: iso(k),
  ...own,
});

describe('an event', () => {
  it('is recorded by a technician, with the start that ended a stop, and read by everybody at the site', async () => {
    const unitId = await unitNamed('Furnace 1');
    const answer = await record(ofUnit(unitId, 'stop', 10, { until: iso(34), note: ' =Burner 3 tripped ' }));
    expect(answer.body.rows.map(({ kind, at, note }: PlantEvent) => [kind, at, note])).toEqual([
      ['start', iso(34), ''],
      ['stop', iso(10), '=Burner 3 tripped'],
    ]);
    const { rows, total, stopped } = await list({ unitId });
    expect({ total, stopped }).toEqual({ total: 2, stopped: [] });
    expect(rows[1]).toMatchObject({
      unitName: 'Furnace 1',
      tagName: null,
      recordedBy: 'Tove Halbrook',
      recordedAt: iso(1000),
      withdrawnAt: null,
    });
  });

  it('is refused beside the time at fault, with a sentence on the clock of the site', async () => {
    const unitId = await unitNamed('Furnace 2');
    await record(ofUnit(unitId, 'stop', 100)).expect(200);
    const again = await record(ofUnit(unitId, 'turnaround', 101)).expect(400);
    expect(again.body.fields).toEqual([
      {
        path: 'at',
        message:
          'Furnace 2 is recorded as stopped since 5 Jan 2026 05:00 already. Record its start first, or withdraw that stop if it is wrong.',
      },
    ]);
    const start = await record(ofUnit(unitId, 'start', 99)).expect(400);
    expect(start.body.fields[0]).toMatchObject({
      path: 'at',
      message: expect.stringContaining('was not stopped'),
    });
    const end = await record(ofUnit(unitId, 'stop', 50, { until: iso(50) })).expect(400);
    expect(end.body.fields[0]).toMatchObject({
      path: 'until',
      message: expect.stringContaining('after it began'),
    });
    const ahead = await record(ofUnit(unitId, 'grade-change', 1001)).expect(400);
    expect(ahead.body.fields[0]).toMatchObject({
      path: 'at',
      message: expect.stringContaining('still to come'),
    });
    const twice = await record(ofUnit(unitId, 'stop', 100)).expect(409);
    expect(twice.body.detail).toBe('Stop of Furnace 2 from 5 Jan 2026 05:00 is recorded already.');
    expect((await list({ unitId })).total).toBe(1);
  });

  it('is of one unit or one soft sensor, and of a unit in use', async () => {
    const unitId = await unitNamed('Furnace 3');
    const both = await record(ofUnit(unitId, 'stop', 10, { softSensorId: 1 })).expect(400);
    expect(both.body.fields[0].path).toBe('unitId');
    await record({ kind: 'stop', at: iso(10) }).expect(400);
    await server.context.db
      .update(units)
      .set({ archivedAt: at(0) })
      .where(eq(units.id, unitId));
    await record(ofUnit(unitId, 'stop', 10)).expect(400);
  });

  it('stops a unit once, however many record a stop of it at the same moment', async () => {
    const unitId = await unitNamed('Furnace 4');
    const { pool } = server.context;
    // Writing takes long enough that all of them have looked before the first is done.
    await pool.query(
      `create function dawdle() returns trigger language plpgsql as 'begin perform pg_sleep(0.2); return new; end'`,
    );
    await pool.query('create trigger dawdle before insert on events for each row execute function dawdle()');
    const answers = await Promise.all([10, 11, 12, 13].map((k) => record(ofUnit(unitId, 'stop', k))));
    await pool.query('drop function dawdle cascade');
    expect(answers.map(({ status }) => status).sort()).toEqual([200, 400, 400, 400]);
    expect((await list({ unitId })).total).toBe(1);
  });

  it('is withdrawn once, with a reason, and stays to be seen', async () => {
    const unitId = await unitNamed('Furnace 5');
    const [event] = (await record(ofUnit(unitId, 'stop', 10))).body.rows as PlantEvent[];
    const stopped = { unitId, unitName: 'Furnace 5', softSensorId: null, tagName: null, since: iso(10) };
    expect((await list()).stopped).toContainEqual(stopped);
    const withdraw = (reason: string) =>
      technician.post(`/api/v1/events/${event!.id}/withdrawal`).send({ reason });
    await withdraw(' ').expect(400);
    await withdraw('It was furnace 6').expect(200);
    expect((await withdraw('Again').expect(409)).body.detail).toBe(
      'Tove Halbrook has withdrawn this event already.',
    );
    expect(await list({ unitId })).toMatchObject({ rows: [], total: 0 });
    expect((await list()).stopped).not.toContainEqual(stopped);
    const { rows } = await list({ unitId, withdrawn: 'true' });
    expect(rows).toMatchObject([{ withdrawnBy: 'Tove Halbrook', withdrawnReason: 'It was furnace 6' }]);
    await record(ofUnit(unitId, 'stop', 10)).expect(200);
    await expect(server.context.pool.query('delete from events')).rejects.toThrow();
  });
});

describe('the list of events', () => {
  it('is newest first, paged, and narrowed by unit, kind and time', async () => {
    const unitId = await unitNamed('Furnace 6');
    for (const k of [5, 15, 25]) await record(ofUnit(unitId, 'grade-change', k)).expect(200);
    await record(ofUnit(unitId, 'method-change', 20)).expect(200);
    const times = async (query: object) => (await list({ unitId, ...query })).rows.map((row) => row.at);
    expect(await times({})).toEqual([25, 20, 15, 5].map(iso));
    expect(await times({ kind: 'grade-change', from: iso(10), to: iso(25) })).toEqual([25, 15].map(iso));
    expect(await times({ perPage: 3, page: 2 })).toEqual([iso(5)]);
    expect((await list({ unitId, perPage: 3 })).total).toBe(4);
  });

  it('of a soft sensor holds its own and its unit’s; of a unit those of its soft sensors too', async () => {
    const own = await makePlant(server);
    const sensor = await putInService(own, modelOf(own));
    const add = (body: object) =>
      own.engineer
        .post(`/api/v1/sites/${own.siteId}/events`)
        .send({ at: iso(10), ...body })
        .expect(200);
    await add({ softSensorId: sensor.id, kind: 'instrument-replaced' });
    await add({ unitId: own.unitId, kind: 'grade-change' });
    const kinds = (found: { rows: PlantEvent[] }) => found.rows.map(({ kind }) => kind).sort();
    const both = ['grade-change', 'instrument-replaced'];
    expect(kinds(await get(own.engineer, `/soft-sensors/${sensor.id}/events`))).toEqual(both);
    expect(kinds(await get(own.engineer, `/sites/${own.siteId}/events`, { unitId: own.unitId }))).toEqual(
      both,
    );
  });
});

describe('a file of events', () => {
  const text = (name: string) =>
    `\ufeffEvent;Unit;Comment;Time;Until\r\n${[
      `stop;${name};"=HYPERLINK(""x"")";05.01.2026 06:00;06.01.2026 18:00`,
      `grade change;${name};;20.01.2026 06:00;`,
      `start;${name};;31.02.2026 06:00;`,
      'stop;Furnace 99;;07.01.2026 06:00;',
    ].join('\r\n')}\r\n`;

  it('is shown row by row before anything is added, then added as it was seen', async () => {
    const unitId = await unitNamed('Furnace 7');
    const dry: EventFile = (await send(text('Furnace 7')).expect(200)).body;
    expect(dry).toMatchObject({
      committed: false,
      undecided: null,
      counts: { rows: 4, added: 2, events: 3, skipped: 0, refused: 2 },
    });
    expect(dry.rows.map(({ line, outcome }) => [line, outcome])).toEqual([
      [4, 'refused'],
      [5, 'refused'],
      [2, 'added'],
      [3, 'added'],
    ]);
    expect(dry.rows[1]!.says).toContain('There is no unit or soft sensor “Furnace 99”');
    expect((await list({ unitId })).total).toBe(0);
    const done: EventFile = (await send(text('Furnace 7'), { outcome: dry.outcome }).expect(200)).body;
    expect(done).toMatchObject({ committed: true, counts: dry.counts });
    const { rows, total } = await list({ unitId });
    expect(total).toBe(3);
    expect(rows.at(-1)).toMatchObject({
      kind: 'stop',
      at: '2026-01-05T05:00:00.000Z',
      note: '=HYPERLINK("x")',
    });
  });

  it('adds nothing the second time, and nothing that changed since it was seen', async () => {
    const unitId = await unitNamed('Furnace 8');
    const dry = (await send(text('Furnace 8')).expect(200)).body;
    await send(text('Furnace 8'), { outcome: dry.outcome }).expect(200);
    const stale = await send(text('Furnace 8'), { outcome: dry.outcome }).expect(409);
    expect(stale.body).toMatchObject({
      code: 'stale',
      current: { counts: { added: 0, skipped: 2, refused: 2 } },
    });
    const again = (await send(text('Furnace 8')).expect(200)).body;
    expect((await send(text('Furnace 8'), { outcome: again.outcome }).expect(409)).body.detail).toContain(
      'nothing to add',
    );
    expect((await list({ unitId })).total).toBe(3);
  });

  it('is asked which number is the day where that stays open', async () => {
    const unitId = await unitNamed('Furnace 9');
    const open = 'unit,event,time\nFurnace 9,stop,03/02/2026 06:00\n';
    expect((await send(open).expect(200)).body).toMatchObject({ undecided: '03/02/2026 06:00', rows: [] });
    const dry = (await send(open, { dayOrder: 'day-month-year' }).expect(200)).body;
    await send(open, { dayOrder: 'day-month-year', outcome: dry.outcome }).expect(200);
    expect((await list({ unitId })).rows[0]!.at).toBe('2026-02-03T05:00:00.000Z');
  });

  it('is refused as a whole beside its field where it holds no events', async () => {
    const answer = await send('hello\nworld\n').expect(422);
    expect(answer.body.fields[0]).toMatchObject({
      path: 'file',
      message: expect.stringContaining('one column'),
    });
    await send('PK\u0003\u0004 workbook').expect(422);
    expect((await server.context.pool.query('select 1 from files')).rowCount).toBe(0);
  });

  it('is recorded by name and hash in the audit trail, and sent by nobody who only reads', async () => {
    const { rows } = await get(plant.manager, '/audit', { entity: 'event-file' });
    expect(rows[0]).toMatchObject({
      entityName: 'events.csv',
      action: 'commit',
      personName: 'Tove Halbrook',
    });
    await send(text('Furnace 1'), {}, reader).expect(403);
  });
});

describe('what a stop does to a soft sensor', () => {
  it('takes the samples of that time out of the judging, and puts them back when it is withdrawn', async () => {
    const own = await makePlant(server);
    server.now.value = at(300);
    await writeInputs(own, 0, 300);
    await writeSamples(
      own,
      Array.from({ length: 30 }, (_none, i) => 5 + 8 * i),
    );
    const sensor = await putInService(own, modelOf(own), { promisedReferenceMs: 400 * hour });
    await server.drainJobs();
    const notCounted = async () => {
      const found = await get(own.engineer, `/soft-sensors/${sensor.id}/performance`, {
        from: iso(0),
        to: iso(300),
      });
      return (found.errors as PairedError[]).filter((pair) => pair.notCounted !== null);
    };
    expect(await notCounted()).toEqual([]);
    const stop = { unitId: own.unitId, kind: 'stop', at: iso(100), until: iso(150) };
    const added = await own.engineer.post(`/api/v1/sites/${own.siteId}/events`).send(stop).expect(200);
    await server.drainJobs();
    expect((await notCounted()).map(({ takenAt, notCounted: why }) => [takenAt, why])).toEqual(
      [101, 109, 117, 125, 133, 141, 149].map((k) => [iso(k), 'unit-stopped']),
    );
    const sheet = () => get(own.engineer, `/soft-sensors/${sensor.id}`);
    expect((await sheet()).status.counted).toBe(11);
    for (const { id } of added.body.rows as PlantEvent[]) {
      await own.engineer.post(`/api/v1/events/${id}/withdrawal`).send({ reason: 'Another kiln' }).expect(200);
    }
    await server.drainJobs();
    expect(await notCounted()).toEqual([]);
    expect((await sheet()).status.counted).toBe(30);
  });

  it('shows it as stopped until the start', async () => {
    const own = await makePlant(server);
    server.now.value = at(20);
    const sensor = await putInService(own, modelOf(own));
    await server.drainJobs();
    const add = (kind: string, k: number) =>
      own.engineer
        .post(`/api/v1/sites/${own.siteId}/events`)
        .send({ softSensorId: sensor.id, kind, at: iso(k) })
        .expect(200);
    const since = async () => (await get(own.engineer, `/soft-sensors/${sensor.id}`)).stoppedSince;
    await add('turnaround', 15);
    await server.drainJobs();
    expect(await since()).toBe(iso(15));
    const { stopped } = await get(own.engineer, `/soft-sensors/${sensor.id}/events`);
    expect(stopped).toMatchObject([{ softSensorId: sensor.id, since: iso(15) }]);
    await add('start', 18);
    await server.drainJobs();
    expect(await since()).toBeNull();
  });
});
