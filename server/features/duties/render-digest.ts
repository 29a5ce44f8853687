import { sql } from 'drizzle-orm';
import type { Duty } from '../../../shared/contracts/duties.ts';
import { dutySentence, lastDecisionWords } from '../../../shared/rules/duty-sentences.ts';
import type { Context } from '../../context.ts';
import type { Tx } from '../../db/client.ts';
import type { Body, LetterLine } from '../../mail/letter.ts';
import { digestLetter } from '../../mail/templates.ts';
import { findPerson } from '../people/repo.ts';
import { type Offered, handoversById, proposalsById, proposalLine, handoverLine } from './digest-lines.ts';
import { digestOf, dropFromDigest } from './digests.ts';
import { readDuties } from './list.ts';

interface NoticeRow extends Record<string, unknown> {
  id: number;
  dutyId: number | null;
  calibrationId: number | null;
  revisionId: number | null;
  handoverId: number | null;
}

/**
 * A digest in words, as things stand when it is sent: what was settled since it was composed is left out and marked so.
 * Null where nothing is left to tell.
 */
export async function renderDigest(context: Context, tx: Tx, mailId: number): Promise<Body | null> {
  const digest = (await digestOf(tx, mailId))!;
  const person = (await findPerson(tx, digest.personId))!;
  const now = context.clock();
  const notices = await noticesOf(tx, digest.id);
  const nobody = { id: person.id, administrator: false, roles: [] };
  const duties = (await readDuties(tx, nobody, now, idsOf(notices, 'dutyId'))).filter(
    ({ state }) => state === 'open',
  );
  const proposals = await proposalsById(tx, idsOf(notices, 'calibrationId'), idsOf(notices, 'revisionId'));
  const handovers = await handoversById(tx, idsOf(notices, 'handoverId'));
  await dropFromDigest(tx, digest.id, settled(notices, duties, [...proposals, ...handovers]), now);
  if (duties.length + proposals.length + handovers.length === 0) return null;
  const { publicUrl } = context.config;
  const link = (path: string) => `${publicUrl}${path}`;
  const recurring = duties.filter(({ kind }) => kind !== 'ownership-gap');
  const lines = (wanted: (duty: Duty) => boolean) =>
    recurring.filter(wanted).map((duty) => dutyLine(duty, person.id, link));
  return digestLetter({
    name: person.name,
    late: lines(({ daysLate }) => daysLate > 0),
    today: lines(({ daysLate }) => daysLate === 0),
    coming: lines(({ daysLate }) => daysLate < 0),
    gaps: duties
      .filter(({ kind }) => kind === 'ownership-gap')
      .map((duty) => dutyLine(duty, person.id, link)),
    decisions: proposals.map((one) => proposalLine(one, link)),
    handovers: handovers.map((one) => handoverLine(one, link)),
    unreachable: unreachableWords(duties, person.id),
    dutiesLink: link('/duties'),
  });
}

async function noticesOf(tx: Tx, digestId: number): Promise<NoticeRow[]> {
  const found = await tx.execute<NoticeRow>(sql`
    select id, duty_id as "dutyId", calibration_id as "calibrationId", revision_id as "revisionId",
      handover_id as "handoverId"
    from notices where digest_id = ${digestId} and dropped_at is null order by id`);
  return found.rows;
}

type Column = 'dutyId' | 'calibrationId' | 'revisionId' | 'handoverId';

const idsOf = (notices: readonly NoticeRow[], column: Column): number[] =>
  [...new Set(notices.map((notice) => notice[column]))].filter((id) => id !== null);

function settled(
  notices: readonly NoticeRow[],
  duties: readonly Duty[],
  others: readonly Offered[],
): number[] {
  const open = new Set([
    ...duties.map(({ id }) => `dutyId ${id}`),
    ...others.map(({ column, id }) => `${column} ${id}`),
  ]);
  const columns: Column[] = ['dutyId', 'calibrationId', 'revisionId', 'handoverId'];
  return notices
    .filter((notice) => !columns.some((column) => open.has(`${column} ${notice[column]}`)))
    .map(({ id }) => id);
}

function dutyLine(duty: Duty, personId: number, link: (path: string) => string): LetterLine {
  const place = `${duty.unitName}, ${duty.siteName}. Class ${duty.importanceClass}.`;
  const last =
    duty.kind === 'ownership-gap' ? '' : ` ${lastDecisionWords(duty.lastDecision, duty.siteZone)}.`;
  return {
    sentence: dutySentence(duty, duty.daysLate),
    link: link(pathOf(duty, personId)),
    detail: `${place} ${whoseWords(duty, personId)}${last}`,
  };
}

/** The page on which the duty is attended to. */
function pathOf({ id, kind, softSensorId, assignees }: Duty, personId: number): string {
  if (kind === 'recalibration') return `/register/${softSensorId}/recalibration`;
  const whose = assignees.some((one) => one.id === personId) ? 'mine' : 'sites';
  return `/duties?whose=${whose}&kind=${kind}&duty=${id}&do=${kind === 'review' ? 'review' : 'name'}`;
}

/** Why this person is told: it is theirs, or whose it is and what they are to it. */
function whoseWords(duty: Duty, personId: number): string {
  if (duty.kind === 'ownership-gap') return 'You manage the site.';
  const names = duty.assignees.map(({ name }) => name).join(', ');
  if (duty.assignees.some(({ id }) => id === personId)) return 'It is yours.';
  if (duty.owner?.id === personId) return `You are the owner; it was given to ${names}.`;
  if (duty.deputy?.id === personId) return `You are the deputy of ${names}.`;
  return `You manage the site; it is for ${names} to attend to.`;
}

/** Whoever else a late duty waits for, and whose address is refused. */
function unreachableWords(duties: readonly Duty[], personId: number): string[] {
  const others = duties.filter(({ assignees }) => assignees.every(({ id }) => id !== personId));
  const said = others.flatMap(({ unreachable }) =>
    unreachable.map(({ name, why }) => `Reminders to ${name} don’t arrive. ${why}`),
  );
  return [...new Set(said)];
}
