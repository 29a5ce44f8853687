import { eq } from 'drizzle-orm';
import { afterAll, beforeAll, beforeEach } from 'vitest';
import type { Context } from '../../server/context.ts';
import { persons } from '../../server/db/schema/index.ts';
import { remind } from '../../server/features/duties/remind.ts';
import { sendQueuedMail } from '../../server/features/mail/send.ts';
import type { Duty } from '../../shared/contracts/duties.ts';
import { type MailServer, type Refusal, startMailServer } from './mail-server.ts';
import { type Plant, get, makePlant, putInService } from './plant.ts';
import { type Agent, useServer } from './server.ts';

export const external = { form: 'external', holdLimitMs: 600_000, residualSd: null };
const everyThirtyDays = { every: 30, unit: 'days' as const, counted: 'last-done' as const, anchorOn: null };
const yearly = { every: 12, unit: 'months' as const, counted: 'last-done' as const, anchorOn: null };
const start = Date.parse('2026-06-01T08:00:00Z');

export interface ReminderScene extends Plant {
  id: number;
  deputy: Agent;
}

/** A server whose reminders go through a mail server that a test can make refuse. */
export function useReminders() {
  const server = useServer();
  const mails = { refusal: null as Refusal | null, server: undefined as unknown as MailServer };
  const tools = { context: undefined as unknown as Context };
  beforeAll(async () => {
    mails.server = await startMailServer((moment) => (moment === 'data' ? mails.refusal : null));
    const config = { ...server.context.config, smtpUrl: mails.server.url };
    tools.context = { ...server.context, config };
  });
  afterAll(() => mails.server.stop());
  beforeEach(() => {
    mails.refusal = null;
  });

  const sql = async <Row extends object>(text: string, values: unknown[] = []): Promise<Row[]> =>
    (await tools.context.pool.query<Row>(text, values)).rows;

  /** A site of its own with one soft sensor in service since 1 June; its recalibration is due on 1 July. */
  async function makeScene(name = 'Marco Castellane'): Promise<ReminderScene> {
    server.now.value = new Date(start);
    const plant = await makePlant(server);
    const roles = [{ siteId: plant.siteId, role: 'engineer' as const }];
    const deputy = await server.signedIn({ name: 'Jun Brightwell', roles });
    await tools.context.db.update(persons).set({ name }).where(eq(persons.id, plant.engineer.personId));
    const { id } = await putInService(plant, external, {
      name: 'Crown interior temperature',
      samplePointId: null,
      recalibrationInterval: everyThirtyDays,
      reviewInterval: yearly,
      ownerId: plant.engineer.personId,
      deputyId: deputy.personId,
      importanceClass: 'A',
    });
    server.now.value = new Date(start);
    return { ...plant, id, deputy };
  }

  /** Tries to send all mails that wait, as workers would in the end. */
  async function sendAll(): Promise<void> {
    const waiting = await sql<{ id: number }>(`select id from mails where state <> 'sent' order by id`);
    for (const { id } of waiting) await sendQueuedMail(tools.context, { mailId: id });
  }

  /** A scan at an instant. */
  async function scan(at: string): Promise<void> {
    server.now.value = new Date(at);
    await remind(tools.context);
  }

  /** A scan at 07:00 of a day in summer at the site, then the sending. */
  async function day(date: string): Promise<void> {
    await scan(`${date}T07:00:00+02:00`);
    await sendAll();
  }

  const told = async (agent: Agent) =>
    (await mails.server.lettersTo(agent.email)).map(({ subject }) => subject);
  const openDuty = async ({ manager, id }: ReminderScene): Promise<Duty> =>
    (await get(manager, '/duties', { softSensorId: id, kind: 'recalibration' })).rows[0];

  return { server, mails, tools, sql, makeScene, sendAll, scan, day, told, openDuty };
}
