import { randomUUID } from 'node:crypto';
import pg from 'pg';
import pino from 'pino';
import type { Context } from '../../server/context.ts';
import { createDb, createPool } from '../../server/db/client.ts';
import { migrate } from '../../server/db/migrate.ts';
import { persons } from '../../server/db/schema/index.ts';
import { readConfig } from '../../server/env.ts';
import { addJob } from '../../server/jobs/queue.ts';
import { createComputePool } from '../../server/jobs/compute-pool.ts';
import { databaseUrl } from '../support/database-url.ts';
import { type MailServer, type Moment, startMailServer } from '../support/mail-server.ts';
import { type Past, compare } from './reminders-check.ts';
import { change, openAll, stopOrStart } from './reminders-events.ts';
import type { Scene } from './reminders-scene.ts';
import { look, standsAt } from './reminders-model.ts';
import { type Size, makeWorld } from './reminders-world.ts';
import { type WorkerCrew, startCrew } from './reminders-workers.ts';
import { type SeededRandom, seededRandom } from './seeded-random.ts';
import type { SlowTrial } from './trial.ts';

interface ReminderTrial extends Size {
  days: number;
  looksADay: number;
  /** Share of looks during which a worker is killed. */
  killing: number;
  bustle: number;
}

const startMs = Date.UTC(2026, 0, 1);
const dayMs = 86_400_000;
const flushDays = 6;
/** Together half of all attempts fail, at any moment up to the one after the message was sent. */
const failing: Record<Moment, number> = { sender: 0.2, recipient: 0.15, data: 0.27 };

/** Whether all that had to be told was told, and nobody had two digests on one day. */
export async function tryReminders(seed: number, trial: ReminderTrial) {
  const { missing, extra, ...counts } = await runReminders(seed, trial);
  const figures = { ...counts, missing: missing.length, extra: extra.length };
  const complete = missing.length === 0 && extra.length === 0 && counts.expected > 0;
  const agrees =
    complete && counts.mostADay === 1 && counts.secondCopies + counts.unknownDigests <= counts.kills;
  return { figures, agrees, missing, extra };
}

const aYear: ReminderTrial = { sensors: 500, people: 100, days: 365, looksADay: 2, killing: 0.1, bustle: 1 };

export const reminderTrials: SlowTrial[] = [
  {
    name: 'a year of reminders to 100 people, workers killed, half of all sendings refused: each stage told, one digest a day',
    run: (seed) => tryReminders(seed, aYear),
  },
];

/**
 * Some time of reminders by a simulated clock: workers are killed, the mail server refuses half of what it is given, the
 * clock jumps, people do, waive, hand over and leave. Everything that had to be told must stand in the server's own log.
 */
async function runReminders(seed: number, trial: ReminderTrial) {
  const random = seededRandom(seed);
  const name = `cupel_trial_${randomUUID().replaceAll('-', '')}`;
  const admin = new pg.Client({ connectionString: databaseUrl('postgres') });
  await admin.connect();
  await admin.query(`create database ${name}`);
  const now = { ms: startMs };
  const luck = seededRandom(seed + 1);
  const mail = await startMailServer(
    (moment) => (luck.uniform() < failing[moment] ? { code: 451, words: 'Try again later' } : null),
    () => now.ms,
  );
  const context = await makeContext(name, mail, () => new Date(now.ms));
  const crew = await startCrew(context, 3, startMs);
  try {
    return await live(context, crew, mail, random, trial, now);
  } finally {
    await crew.stop();
    await mail.stop();
    await context.compute.stop();
    await context.pool.end();
    await admin.query(`drop database ${name} with (force)`);
    await admin.end();
  }
}

async function makeContext(name: string, mail: MailServer, clock: () => Date): Promise<Context> {
  const url = databaseUrl(name);
  await migrate(url);
  const config = readConfig({ DATABASE_URL: url, SMTP_URL: mail.url, NODE_ENV: 'test' });
  const log = pino({ level: 'silent' });
  const pool = createPool(url, log, 4);
  return { config, pool, db: createDb(pool), log, clock, compute: createComputePool(config) };
}

async function live(
  context: Context,
  crew: WorkerCrew,
  mail: MailServer,
  random: SeededRandom,
  trial: ReminderTrial,
  now: { ms: number },
) {
  const world = await makeWorld(context.db, random, trial, startMs);
  const [administrator] = await context.db
    .insert(persons)
    .values({ name: 'Administrator', email: 'admin@trial.example', administrator: true, passwordHash: '-' })
    .returning();
  const past: Past = { lastTick: 0, tickAt: new Map(), stoppedAt: [] };
  const sceneAt = (): Scene => {
    const tick = past.stoppedAt.length;
    return {
      context,
      random,
      world,
      administratorId: administrator!.id,
      nowMs: now.ms,
      tick,
      bustle: trial.bustle,
    };
  };
  const lookNow = async () => {
    const tick = past.stoppedAt.length;
    past.tickAt.set(now.ms, tick);
    past.stoppedAt.push(new Set([...world.stopped.keys()].filter((id) => standsAt(world, id, now.ms))));
    look(world, now.ms, tick);
    await workAt(context, crew, mail, random, now.ms, past.lastTick > 0 ? 0 : trial.killing);
  };

  openAll(sceneAt());
  await lookNow();
  for (const ms of moments(random, trial)) {
    now.ms = ms;
    crew.setClock(ms);
    await change(sceneAt());
    await lookNow();
    if (random.uniform() < 0.03) {
      // Somebody sets the clock back by an hour.
      now.ms = ms - 3_600_001;
      await lookNow();
    }
  }
  past.lastTick = past.stoppedAt.length - 1;
  now.ms = startMs + trial.days * dayMs;
  for (const [unitId, at] of world.stopped) if (at !== null) await stopOrStart(sceneAt(), unitId);
  for (let looks = 0; looks < flushDays * 4; looks++, now.ms += dayMs / 4) await lookNow();
  return {
    ...(await compare(context, world, mail.log, past)),
    kills: crew.kills(),
    looks: past.stoppedAt.length,
  };
}

/** Instants at which somebody looks: some a day at any hour, and now and then nobody for days. */
function* moments(random: SeededRandom, { days, looksADay }: ReminderTrial): Generator<number> {
  let skipped = 0;
  for (let day = 0; day < days; day++) {
    if (skipped > 0) skipped--;
    else if (random.uniform() < 0.02) skipped = 1 + Math.floor(random.uniform() * 5);
    const hours = Array.from({ length: looksADay }, () => random.uniform()).sort((a, b) => a - b);
    if (skipped > 0) continue;
    for (const hour of hours) yield startMs + Math.floor((day + hour) * dayMs) + 1;
  }
}

/**
 * Two scans at once and all sendings that wait. A worker may be killed at any moment, or just when the mail server has
 * accepted a message and nobody knows it yet.
 */
async function workAt(
  context: Context,
  crew: WorkerCrew,
  mail: MailServer,
  random: SeededRandom,
  ms: number,
  killing: number,
): Promise<void> {
  crew.setClock(ms);
  await context.pool
    .query(`update graphile_worker._private_jobs j set run_at = now() from graphile_worker._private_tasks t
    where t.id = j.task_id and t.identifier = 'send-mail' and j.locked_at is null`);
  for (let n = 0; n < 2; n++) await addJob(context.db, 'remind', {}, { maxAttempts: 25 });
  const which = Math.floor(random.uniform() * 3);
  const moment = random.uniform();
  if (moment < killing / 2) {
    mail.onAccepted = () => {
      mail.onAccepted = () => {};
      crew.killOne(which);
    };
  } else if (moment < killing) {
    await new Promise((resolve) => setTimeout(resolve, random.uniform() * 120));
    crew.killOne(which);
  }
  await crew.settled();
  mail.onAccepted = () => {};
}
