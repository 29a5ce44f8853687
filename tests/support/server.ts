import type { Express } from 'express';
import { runOnce } from 'graphile-worker';
import request from 'supertest';
import { hashPassword } from '../../server/auth/password.ts';
import { createApp } from '../../server/app.ts';
import type { Context } from '../../server/context.ts';
import { persons, siteRoles } from '../../server/db/schema/index.ts';
import { refreshSpan } from '../../server/features/tags/spans.ts';
import { taskList } from '../../server/jobs/tasks.ts';
import { quietLogger } from '../../server/jobs/quiet-logger.ts';
import type { Role } from '../../shared/contracts/access.ts';
import { useTestContext } from './test-context.ts';

export const password = 'a long enough password';
let passwordHash: Promise<string> | undefined;

/** A real server on a clone of the template database, with real mail; the clock can be set. */
export interface TestServer {
  app: Express;
  context: Context;
  now: { value: Date | null };
  /** Runs every waiting job to its end. */
  drainJobs(): Promise<void>;
  /** Counts a tag's readings anew, for tests that write readings themselves. */
  refreshSpan(siteId: number, tagId: number): Promise<void>;
  /** Adds a person and returns an agent that is signed in as them. */
  signedIn(who: {
    name?: string;
    administrator?: boolean;
    roles?: { siteId: number; role: Role }[];
  }): Promise<Agent>;
}

export type Agent = ReturnType<typeof request.agent> & { personId: number; email: string };

export const origin = 'http://127.0.0.1:4600';

/** Makes a test server for the calling file: one clone of the template database, dropped at the end. */
export function useServer(): TestServer {
  const server = { now: { value: null } } as unknown as TestServer;
  useTestContext(
    () => server.now.value ?? new Date(),
    (context) => void serverOn(context, server),
  );
  return server;
}

/** The same on a context that is there already: what a browser test sets its scene with. */
export function serverOn(
  context: Context,
  server = { now: { value: null } } as unknown as TestServer,
): TestServer {
  server.context = context;
  server.app = createApp(context, { signInAttempts: 500 });
  server.drainJobs = () =>
    runOnce({
      pgPool: server.context.pool,
      taskList: taskList(server.context),
      logger: quietLogger(server.context),
      noHandleSignals: true,
      noPreparedStatements: true,
    });
  server.refreshSpan = (siteId, tagId) => refreshSpan(server.context.db, siteId, tagId);
  server.signedIn = (who) => signIn(server, who);
  return server;
}

let people = 0;

async function signIn(server: TestServer, who: Parameters<TestServer['signedIn']>[0]): Promise<Agent> {
  const { db } = server.context;
  const email = `person${++people}@cupel.example`;
  const [person] = await db
    .insert(persons)
    .values({
      name: who.name ?? `Person ${people}`,
      email,
      administrator: who.administrator ?? false,
      passwordHash: await (passwordHash ??= hashPassword(password)),
    })
    .returning();
  if (who.roles?.length)
    await db.insert(siteRoles).values(who.roles.map((role) => ({ personId: person!.id, ...role })));
  const agent = request.agent(server.app).set('Origin', origin) as Agent;
  await agent.post('/api/v1/session').send({ email, password }).expect(200);
  return Object.assign(agent, { personId: person!.id, email });
}
