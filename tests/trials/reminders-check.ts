import { simpleParser } from 'mailparser';
import type { Context } from '../../server/context.ts';
import type { Accepted } from '../support/mail-server.ts';
import { type Expected, type World, localDate } from './reminders-model.ts';

/** What stood at each tick, for judging what was left out. */
export interface Past {
  /** The last tick whose decisions had time enough to arrive. */
  lastTick: number;
  /** Tick of each instant of the simulated clock. */
  tickAt: Map<number, number>;
  stoppedAt: Set<number>[];
}

interface Letter {
  to: string;
  text: string;
  tick: number;
  at: number;
}

interface Row {
  key: string;
  stage: number;
  personId: number;
  messageId: string;
}
interface Digest {
  personId: number;
  messageId: string;
  composed: number;
}

/** Compares what the mail server accepted, by its own log, with what the model expects. */
export async function compare(context: Context, world: World, log: readonly Accepted[], past: Past) {
  const letters = await lettersById(log, past);
  const told = new Map(
    (await toldRows(context)).map((row) => [`${row.key} ${row.stage} ${row.personId}`, row]),
  );
  const digests = await digestsOf(context, past);
  const missing: string[] = [];
  let settled = 0;
  let delivered = 0;
  let tooNew = 0;
  const unknown = new Set<string>();
  for (const [id, one] of world.expected) {
    const row = told.get(id);
    const arrived = row && letters.get(row.messageId);
    const address = world.people.get(one.personId)!.email;
    if (arrived?.some(({ to, text }) => to === address && text.includes(`${one.tagName} `))) delivered++;
    else if (one.decided > past.lastTick) tooNew++;
    else if (wasSettledFirst(one, digests, letters, past)) settled++;
    else {
      const messageId = toldUnknown(one, digests, letters);
      if (messageId) unknown.add(messageId);
      else missing.push(id);
    }
  }
  const extra = [...told.keys()].filter((id) => !world.expected.has(id));
  return {
    expected: world.expected.size - tooNew,
    delivered,
    settled,
    unknownDigests: unknown.size,
    missing,
    extra,
    ...counts(world, letters, log),
  };
}

async function lettersById(log: readonly Accepted[], past: Past): Promise<Map<string, Letter[]>> {
  const found = new Map<string, Letter[]>();
  for (const { to, raw, at } of log) {
    const { messageId, text } = await simpleParser(raw, { skipImageLinks: true, skipHtmlToText: true });
    const letter = { to, text: text ?? '', tick: past.tickAt.get(at)!, at };
    found.set(messageId!, [...(found.get(messageId!) ?? []), letter]);
  }
  return found;
}

/** Notices that digests carried, named as the model names them. */
async function toldRows({ pool }: Context): Promise<Row[]> {
  const found = await pool.query<Row>(`
    with numbered as (select id, soft_sensor_id, kind,
      row_number() over (partition by soft_sensor_id order by id) as opened from duties)
    select case when n.handover_id is not null then 'handover ' || n.handover_id
        else d.soft_sensor_id || ' ' || d.kind || ' ' || d.opened end as key,
      n.stage, n.person_id as "personId", m.message_id as "messageId"
    from notices n join digests g on g.id = n.digest_id join mails m on m.id = g.mail_id and m.state = 'sent'
    left join numbered d on d.id = n.duty_id
    where n.dropped_at is null`);
  return found.rows;
}

async function digestsOf({ pool }: Context, past: Past): Promise<Map<number, Digest[]>> {
  const found = await pool.query<{ personId: number; messageId: string; at: Date }>(`
    select g.person_id as "personId", m.message_id as "messageId", g.composed_at as at
    from digests g join mails m on m.id = g.mail_id`);
  const byPerson = new Map<number, Digest[]>();
  for (const { personId, messageId, at } of found.rows) {
    const digest = { personId, messageId, composed: past.tickAt.get(at.getTime())! };
    byPerson.set(personId, [...(byPerson.get(personId) ?? []), digest]);
  }
  return byPerson;
}

/** It ended before any digest that could have carried it was accepted. */
function wasSettledFirst(
  { personId, unitId, decided, ended, key }: Expected,
  digests: Map<number, Digest[]>,
  letters: Map<string, Letter[]>,
  { stoppedAt }: Past,
): boolean {
  if (ended === null) return false;
  return !(digests.get(personId) ?? []).some(({ messageId, composed }) => {
    const could = composed >= decided && composed < ended;
    const stopped = !key.startsWith('handover') && stoppedAt[composed]!.has(unitId);
    return could && !stopped && (letters.get(messageId) ?? []).some(({ tick }) => tick < ended);
  });
}

/**
 * Message-ID of a digest that told it by the server's own log, though the database does not know: its worker was killed
 * before the commit, and it was settled before the digest was taken up again.
 */
function toldUnknown(
  { personId, tagName, decided, ended }: Expected,
  digests: Map<number, Digest[]>,
  letters: Map<string, Letter[]>,
): string | null {
  if (ended === null) return null;
  const found = (digests.get(personId) ?? []).find(
    ({ messageId, composed }) =>
      composed >= decided &&
      (letters.get(messageId) ?? []).some(({ tick, text }) => tick < ended && text.includes(`${tagName} `)),
  );
  return found?.messageId ?? null;
}

function counts(world: World, letters: Map<string, Letter[]>, log: readonly Accepted[]) {
  const people = new Map([...world.people.values()].map((one) => [one.email, one]));
  const perDay = new Map<string, Set<string>>();
  for (const [messageId, copies] of letters) {
    for (const { to, at } of copies) {
      const day = `${to} ${localDate(at, people.get(to)!.homeZone)}`;
      perDay.set(day, (perDay.get(day) ?? new Set()).add(messageId));
    }
  }
  return {
    messages: letters.size,
    secondCopies: log.length - letters.size,
    mostADay: Math.max(0, ...[...perDay.values()].map((ids) => ids.size)),
  };
}
