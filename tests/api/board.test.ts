import { eq } from 'drizzle-orm';
import { beforeAll, describe, expect, it } from 'vitest';
import { duties, events, ownerships, softSensorStatus } from '../../server/db/schema/index.ts';
import { markSensorDirty } from '../../server/features/estimates/work.ts';
import type { Board } from '../../shared/contracts/board.ts';
import {
  at,
  get,
  hour,
  makePlant,
  modelOf,
  type Plant,
  post,
  putInService,
  writeInputs,
  writeSamples,
} from '../support/plant.ts';
import { type Agent, useServer } from '../support/server.ts';

const server = useServer();
let plant: Plant;
let good: number;
let bad: number;
const end = 8 * 30 + 10;

beforeAll(async () => {
  plant = await makePlant(server);
  server.now.value = at(end);
  await writeInputs(plant, 0, end);
  await writeSamples(
    plant,
    Array.from({ length: 30 }, (_, i) => 5 + 8 * i),
  );
  const own = { promisedReferenceMs: 900 * hour };
  good = (await putInService(plant, modelOf(plant), own)).id;
  bad = (await putInService(plant, modelOf(plant, 7), own)).id;
  await server.drainJobs();
});

const board = (agent: Agent, query: object = {}): Promise<Board> => get(agent, '/board', query);
const idsOf = ({ rows }: Board) => rows.map(({ softSensorId }) => softSensorId);
const later = (hours: number) => (server.now.value = new Date(server.now.value!.getTime() + hours * hour));

describe('the board', () => {
  it('lists mine: those that a person owns or is deputy of', async () => {
    const { db } = server.context;
    const someone = await server.signedIn({ roles: [{ siteId: plant.siteId, role: 'engineer' }] });
    expect(idsOf(await board(someone, { health: 'all', whose: 'mine' }))).toEqual([]);
    await db.insert(ownerships).values({
      siteId: plant.siteId,
      softSensorId: good,
      ownerId: plant.engineer.personId,
      deputyId: someone.personId,
      effectiveFrom: later(1),
      recordedBy: plant.engineer.personId,
    });
    const mine = await board(someone, { health: 'all', whose: 'mine' });
    expect(idsOf(mine)).toEqual([good]);
    expect(mine.mine).toEqual({ total: 1, fit: 1, watch: 0, unfit: 0, unproven: 0, stopped: 0 });
    expect((await board(someone)).mine).toBeNull();
  });

  it('counts the soft sensors of each site by health', async () => {
    const { counts, sites } = await board(plant.manager);
    const { total, fit, watch, unfit, unproven, stopped } = counts;
    expect(sites).toMatchObject([{ siteId: plant.siteId, total, fit, watch, unfit, unproven, stopped }]);
    expect([total, fit, unfit]).toEqual([2, 1, 1]);
  });

  it('offers what may be confirmed as found to engineers of the site only', async () => {
    const { rows, confirmable: howMany } = await board(plant.engineer, { health: 'confirmable' });
    expect(howMany).toBe(1);
    expect((await board(plant.manager)).confirmable).toBe(0);
    expect(rows.map(({ softSensorId, confirmable }) => [softSensorId, confirmable])).toEqual([[good, true]]);
    expect(idsOf(await board(plant.manager, { health: 'confirmable' }))).toEqual([]);
    const [row] = (await board(plant.manager, { health: 'fit' })).rows;
    expect(row).toMatchObject({ softSensorId: good, confirmable: false, referencesSince: 30 });
  });

  it('counts late duties and missing owners, and names the duty that falls due first', async () => {
    const { db } = server.context;
    const open = (
      softSensorId: number,
      kind: 'recalibration' | 'review' | 'ownership-gap',
      dueOn: string,
    ) => ({
      siteId: plant.siteId,
      softSensorId,
      kind,
      dueOn,
      openedAt: at(0),
      openedOn: '2026-01-01',
    });
    await db
      .update(duties)
      .set({ state: 'done', closedAt: at(0) })
      .where(eq(duties.state, 'open'));
    await db
      .insert(duties)
      .values([
        open(bad, 'recalibration', '2026-01-05'),
        open(bad, 'review', '2026-12-31'),
        open(bad, 'ownership-gap', '2026-01-02'),
        open(good, 'recalibration', '2026-07-01'),
      ]);
    const { counts, rows } = await board(plant.manager);
    expect(counts).toMatchObject({ total: 2, unfit: 1, fit: 1, overdue: 1, unowned: 1 });
    expect(rows[0]!.duty).toEqual({ kind: 'recalibration', dueOn: '2026-01-05' });
  });

  it('tells what changed since a person last looked, however often the page is loaded', async () => {
    const looks = () => post(plant.manager, '/board/look', {});
    expect((await looks()).lookedAt).toBeNull();
    const first = server.now.value!.toISOString();
    later(2);
    expect((await board(plant.manager)).lookedAt).toBe(first);
    await looks();
    later(0.2);
    await looks();
    expect((await board(plant.manager)).lookedAt).toBe(first);
    await server.context.db
      .update(softSensorStatus)
      .set({ healthSince: server.now.value!, healthBefore: 'fit' })
      .where(eq(softSensorStatus.softSensorId, bad));
    expect(idsOf(await board(plant.manager, { health: 'all', changedSince: first }))).toEqual([bad]);
  });

  it('offers nothing twice: what was confirmed leaves the offer before it is judged anew', async () => {
    const offered = async () => (await board(plant.engineer)).confirmable;
    expect(await offered()).toBe(1);
    later(1);
    const { confirmed } = await post(plant.engineer, '/confirmations', { softSensorIds: [good] });
    expect(confirmed).toHaveLength(1);
    expect(await offered()).toBe(0);
    await server.drainJobs();
    expect(await offered()).toBe(0);
  });

  it('sets stopped soft sensors apart, with the health that they had', async () => {
    const { db } = server.context;
    const stop = later(1);
    await db.insert(events).values({
      siteId: plant.siteId,
      softSensorId: bad,
      kind: 'stop',
      at: stop,
      recordedBy: plant.engineer.personId,
      recordedAt: stop,
    });
    later(1);
    await db.transaction((tx) => markSensorDirty(tx, plant.siteId, bad, stop));
    await server.drainJobs();
    const { counts, rows } = await board(plant.manager, { health: 'stopped' });
    expect(counts).toMatchObject({ total: 1, unfit: 0, stopped: 1 });
    expect(rows).toMatchObject([{ softSensorId: bad, health: 'unfit', stoppedSince: stop.toISOString() }]);
    expect(idsOf(await board(plant.manager))).toEqual([]);
  });
});
