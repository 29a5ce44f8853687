import { eq } from 'drizzle-orm';
import { describe, expect, it } from 'vitest';
import { persons } from '../../server/db/schema/index.ts';
import { remind } from '../../server/features/duties/remind.ts';
import { sendQueuedMail } from '../../server/features/mail/send.ts';
import { useReminders } from '../support/reminder-scene.ts';
import type { Agent } from '../support/server.ts';

const { mails, tools, sql, makeScene, sendAll, scan, day, told, openDuty } = useReminders();

describe('a mail that does not go out', () => {
  const rowOf = async (agent: Agent) =>
    (
      await sql<{
        id: number;
        state: string;
        last_error: string | null;
        message_id: string;
        attempts: number;
      }>('select * from mails where person_id = $1 order by id desc limit 1', [agent.personId])
    )[0]!;
  const jobOf = async (id: number) =>
    (
      await sql<{ run_at: Date; wait: number }>(
        `select run_at, extract(epoch from run_at - now())::float8 as wait from graphile_worker.jobs where key = $1`,
        [`mail:${id}`],
      )
    )[0];

  it('for now is tried again, later each time, at most an hour apart; a lost job is found again', async () => {
    const scene = await makeScene();
    mails.refusal = { code: 451, words: 'Try again later' };
    await day('2026-06-24');
    const { id, state } = await rowOf(scene.engineer);
    expect(state).toBe('failed');
    const waits: number[] = [(await jobOf(id))!.wait];
    for (let n = 0; n < 12; n++) {
      await sendQueuedMail(tools.context, { mailId: id });
      waits.push((await jobOf(id))!.wait);
    }
    expect(waits[0]).toBeCloseTo(30, -1);
    expect(waits[1]).toBeCloseTo(60, -1);
    expect(Math.max(...waits)).toBeLessThanOrEqual(3600);
    expect(waits.at(-1)).toBeCloseTo(3600, -1);

    await sql(`select graphile_worker.remove_job($1)`, [`mail:${id}`]);
    await scan('2026-06-24T08:00:00Z');
    expect((await jobOf(id))!.wait).toBeLessThanOrEqual(0);
    mails.refusal = null;
    await sendAll();
    expect(await told(scene.engineer)).toEqual(['Cupel: 1 due soon']);
  });

  it('is not followed by another until it is sent, and not by one on the day that it arrives late', async () => {
    const scene = await makeScene();
    mails.refusal = { code: 451, words: 'Try again later' };
    await day('2026-06-24');
    await day('2026-07-01');
    mails.refusal = null;
    await sendAll();
    // Sent late, it says how things stand now.
    expect(await told(scene.engineer)).toEqual(['Cupel: 1 due today']);
    await scan('2026-07-01T10:00:00Z');
    await sendAll();
    expect(await told(scene.engineer)).toHaveLength(1);
    await day('2026-07-02');
    expect(await told(scene.engineer)).toEqual(['Cupel: 1 due today', 'Cupel: 1 late']);
  });

  it('because its address bounces is tried once a day, seen by the managers, and goes to the new address', async () => {
    const scene = await makeScene();
    mails.refusal = { code: 550, words: '5.1.1 No such user here' };
    await day('2026-07-01');
    const failed = await rowOf(scene.engineer);
    expect(failed.last_error).toMatch(/^The mail server refuses this address: .*5\.1\.1 No such user here/);
    expect((await jobOf(failed.id))!.wait).toBeCloseTo(86_400, -3);
    expect((await openDuty(scene)).unreachable).toEqual([
      { name: 'Marco Castellane', why: expect.stringContaining('No such user here') },
    ]);
    mails.refusal = null;
    await scan('2026-07-15T05:00:00Z');
    const manager = await rowOf(scene.manager);
    await sendQueuedMail(tools.context, { mailId: manager.id });
    const [letter] = await mails.server.lettersTo(scene.manager.email);
    expect(letter!.text).toMatch(/Reminders to Marco Castellane don’t arrive\..*No such user here/);

    await tools.context.db
      .update(persons)
      .set({ email: 'marco.new@cupel.example' })
      .where(eq(persons.id, scene.engineer.personId));
    await remind(tools.context);
    expect((await jobOf(failed.id))!.wait).toBeLessThanOrEqual(0);
    await sendAll();
    expect(await told(scene.engineer)).toEqual([]);
    expect(await mails.server.lettersTo('marco.new@cupel.example')).toHaveLength(1);
  });

  it('goes to nobody who was deactivated', async () => {
    const scene = await makeScene();
    await scan('2026-07-01T05:00:00Z');
    await sql('update persons set deactivated_at = now() where id = $1', [scene.engineer.personId]);
    await sendAll();
    expect(await told(scene.engineer)).toEqual([]);
    expect((await rowOf(scene.engineer)).last_error).toBe('Not sent: the person was deactivated meanwhile.');
  });

  it('is sent again under the same Message-ID where the server had it but the commit failed', async () => {
    const scene = await makeScene();
    await scan('2026-07-01T05:00:00Z');
    const { id, message_id } = await rowOf(scene.engineer);
    await sql(
      `create function fail() returns trigger language plpgsql as 'begin raise exception ''no''; end'`,
    );
    await sql('create trigger fail before update on mails for each row execute function fail()');
    await expect(sendQueuedMail(tools.context, { mailId: id })).rejects.toThrow();
    await sql('drop function fail cascade');
    await sendQueuedMail(tools.context, { mailId: id });
    await sendQueuedMail(tools.context, { mailId: id });
    const letters = await mails.server.lettersTo(scene.engineer.email);
    expect(letters.map(({ messageId }) => messageId)).toEqual([message_id, message_id]);
  });

  it('that the server had, but whose duty was settled before it was taken up again, is not sent a second time', async () => {
    const scene = await makeScene();
    await scan('2026-07-01T05:00:00Z');
    const { id } = await rowOf(scene.engineer);
    await sql(
      `create function fail() returns trigger language plpgsql as 'begin raise exception ''no''; end'`,
    );
    await sql('create trigger fail before update on mails for each row execute function fail()');
    await expect(sendQueuedMail(tools.context, { mailId: id })).rejects.toThrow();
    await sql('drop function fail cascade');
    const { version, ...duty } = await openDuty(scene);
    const body = { reason: 'Waits', dueOn: '2026-07-20', version };
    await scene.manager.post(`/api/v1/duties/${duty.id}/waiver`).send(body).expect(200);
    await sendAll();
    expect(await told(scene.engineer)).toEqual(['Cupel: 1 due today']);
    expect((await rowOf(scene.engineer)).last_error).toBe('Not sent: all of it was settled meanwhile.');
  });

  it('is given up after a month, and what came since is told in the next', async () => {
    const scene = await makeScene();
    mails.refusal = { code: 550, words: 'No such user here' };
    await day('2026-06-02');
    await day('2026-07-01');
    mails.refusal = null;
    await scan('2026-07-03T05:00:00Z');
    expect((await rowOf(scene.engineer)).last_error).toMatch(/^Not sent: given up after 30 days\./);
    await day('2026-07-04');
    expect(await told(scene.engineer)).toEqual(['Cupel: 1 late']);
  });
});
