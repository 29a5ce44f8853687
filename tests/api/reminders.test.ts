import { describe, expect, it } from 'vitest';
import { events } from '../../server/db/schema/index.ts';
import { remind } from '../../server/features/duties/remind.ts';
import type { Duty } from '../../shared/contracts/duties.ts';
import { post } from '../support/plant.ts';
import { external, useReminders } from '../support/reminder-scene.ts';

const { server, mails, tools, sql, makeScene, sendAll, scan, day, told, openDuty } = useReminders();

describe('reminders', () => {
  it('go to the owner before and on the day, to the deputy a week later, to the manager after two, then weekly', async () => {
    const scene = await makeScene();
    const heard: Record<string, string[]> = {};
    const all = { owner: scene.engineer, deputy: scene.deputy, manager: scene.manager };
    for (let d = 1; d <= 60; d++) {
      const date = new Date(Date.UTC(2026, 5, d)).toISOString().slice(0, 10);
      const before = await Promise.all(Object.values(all).map(told));
      await day(date);
      for (const [i, [who, agent]] of Object.entries(all).entries()) {
        const news = (await told(agent)).slice(before[i]!.length);
        if (news.length > 0) (heard[date] ??= []).push(`${who}: ${news.join()}`);
      }
    }
    const late = (...who: string[]) => who.map((one) => `${one}: Cupel: 1 late`);
    expect(heard).toEqual({
      '2026-06-01': ['owner: Cupel: 1 due soon'],
      '2026-06-24': ['owner: Cupel: 1 due soon'],
      '2026-07-01': ['owner: Cupel: 1 due today'],
      '2026-07-08': late('owner', 'deputy'),
      '2026-07-15': late('owner', 'deputy', 'manager'),
      '2026-07-22': late('owner', 'deputy', 'manager'),
      '2026-07-29': late('owner', 'deputy', 'manager'),
    });
  });

  it('say what, where, whose it is, what was decided last, and link to the page, in HTML and in plain text', async () => {
    const scene = await makeScene();
    await day('2026-06-24');
    const [letter] = await mails.server.lettersTo(scene.engineer.email);
    const { tagName } = await openDuty(scene);
    const sentence = `Recalibration of ${tagName} Crown interior temperature is due on 1 Jul, in 7 days.`;
    const link = `${tools.context.config.publicUrl}/register/${scene.id}/recalibration`;
    for (const part of [letter!.text, letter!.html as string]) {
      for (const words of [
        sentence,
        link,
        'Hello Marco Castellane,',
        'It is yours.',
        'Nothing decided yet',
        'You get this because',
      ]) {
        expect(part).toContain(words);
      }
    }
    expect(letter!.headers.get('auto-submitted')).toBe('auto-generated');
    expect(letter!.html).not.toMatch(/<img|<link|url\(|@import|src=/);
  });

  it('write a name with markup as text', async () => {
    const scene = await makeScene('<b onclick="x()">Marco</b> & Söhne\r\nBcc: all@cupel.example');
    await day('2026-07-01');
    const [letter] = await mails.server.lettersTo(scene.engineer.email);
    expect(letter!.html).toContain('&lt;b onclick=&quot;x()&quot;&gt;Marco&lt;/b&gt; &amp; Söhne');
    expect(letter!.html).not.toContain('<b onclick');
    expect(letter!.text).toContain('<b onclick="x()">Marco</b> & Söhne');
    expect(letter!.headers.has('bcc')).toBe(false);
  });

  it('are decided once, however many scans run at once, and never twice a day', async () => {
    const scene = await makeScene();
    server.now.value = new Date('2026-07-01T05:00:00Z');
    await Promise.all([1, 2, 3, 4].map(() => remind(tools.context)));
    server.now.value = new Date('2026-07-01T08:00:00Z');
    await Promise.all([1, 2, 3, 4].map(() => remind(tools.context)));
    await Promise.all([1, 2, 3].map(sendAll));
    expect(await told(scene.engineer)).toEqual(['Cupel: 1 due today']);
  });

  it('of a unit that is stopped wait until it runs again, and none is left out', async () => {
    const scene = await makeScene();
    const record = (kind: 'stop' | 'start', at: string) =>
      tools.context.db.insert(events).values({
        siteId: scene.siteId,
        unitId: scene.unitId,
        kind,
        at: new Date(at),
        recordedBy: scene.engineer.personId,
        recordedAt: new Date(at),
      });
    // Decided in the night, and the unit stops before the morning.
    await scan('2026-06-01T22:30:00Z');
    await record('stop', '2026-06-02T00:00:00Z');
    for (const date of ['2026-06-24', '2026-07-01', '2026-07-08']) await day(date);
    expect(await told(scene.engineer)).toEqual([]);
    await record('start', '2026-07-09T12:00:00Z');
    await day('2026-07-10');
    expect(await told(scene.engineer)).toEqual(['Cupel: 1 late']);
    expect(await told(scene.deputy)).toEqual(['Cupel: 1 late']);
    const stages = await sql<{ stage: number }>(
      'select stage from notices n join duties d on d.id = n.duty_id where d.soft_sensor_id = $1 and person_id = $2 order by 1',
      [scene.id, scene.engineer.personId],
    );
    expect(stages.map(({ stage }) => stage)).toEqual([-30, -7, 0, 7]);
  });

  it('of what was settled before the morning, or before the mail went out, are dropped', async () => {
    const scene = await makeScene();
    const waive = async (duty: Duty, dueOn: string) =>
      post(scene.manager, `/duties/${duty.id}/waiver`, { reason: 'Waits', dueOn, version: duty.version });
    await day('2026-06-02');
    await scan('2026-06-24T00:30:00+02:00');
    await waive(await openDuty(scene), '2026-07-24');
    await day('2026-06-25');
    expect(await told(scene.engineer)).toEqual(['Cupel: 1 due soon', 'Cupel: 1 due soon']);

    await scan('2026-07-17T07:00:00+02:00');
    await waive(await openDuty(scene), '2026-08-10');
    await sendAll();
    const [row] = await sql<{ last_error: string }>(
      'select last_error from mails where person_id = $1 order by id desc limit 1',
      [scene.engineer.personId],
    );
    expect(row!.last_error).toBe('Not sent: all of it was settled meanwhile.');
    expect(await told(scene.engineer)).toHaveLength(2);
  });

  it('tell a successor where things stand, and the one before nothing more', async () => {
    const scene = await makeScene();
    await day('2026-06-02');
    await day('2026-06-24');
    const body = { part: 'owner', toId: scene.deputy.personId, reason: 'Takes over' };
    await post(scene.deputy, `/soft-sensors/${scene.id}/handovers`, body);
    await day('2026-06-26');
    expect(await told(scene.deputy)).toEqual(['Cupel: 1 due soon']);
    expect(await told(scene.engineer)).toHaveLength(2);
    // Class A without a deputy now.
    expect(await told(scene.manager)).toEqual(['Cupel: 1 ownership gap']);
  });

  it('ask for decisions and answers, each once', async () => {
    const scene = await makeScene();
    await day('2026-06-02');
    server.now.value = new Date('2026-06-10T09:00:00Z');
    const draft = await scene.engineer
      .put(`/api/v1/soft-sensors/${scene.id}/draft`)
      .send({ model: external, version: 1 });
    await post(scene.engineer, `/soft-sensors/${scene.id}/revisions`, {
      version: draft.body.version,
      reason: 'Other <limits>',
      changeReference: '',
    });
    await post(scene.engineer, `/soft-sensors/${scene.id}/handovers`, {
      part: 'owner',
      toId: scene.deputy.personId,
      reason: 'Moves on',
    });
    await day('2026-06-11');
    await day('2026-06-12');
    expect(await told(scene.manager)).toEqual(['Cupel: 1 waits for your decision']);
    expect(await told(scene.deputy)).toEqual(['Cupel: 1 handed over to you']);
    const [letter] = await mails.server.lettersTo(scene.manager.email);
    expect(letter!.html).toContain('Other &lt;limits&gt;');
    expect(letter!.text).toContain(`/register/${scene.id}/model`);
  });
});
