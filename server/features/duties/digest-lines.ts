import { sql } from 'drizzle-orm';
import { formatDate } from '../../../shared/rules/format.ts';
import type { Tx } from '../../db/client.ts';
import type { LetterLine } from '../../mail/letter.ts';

/** A proposal that waits for a decision, or an offer that waits for an answer. */
export interface Offered extends Record<string, unknown> {
  column: 'calibrationId' | 'revisionId' | 'handoverId';
  id: number;
  softSensorId: number;
  tagName: string;
  name: string;
  importanceClass: string;
  unitName: string;
  siteName: string;
  zone: string;
  proposedBy: string;
  proposedAt: string;
  reason: string;
  number: number | null;
  part: string | null;
}

const around = sql`join soft_sensors s on s.site_id = x.site_id and s.id = x.soft_sensor_id
  join units u on u.site_id = s.site_id and u.id = s.unit_id
  join sites t on t.id = x.site_id
  join persons p on p.id = x.proposed_by`;
const known = sql`x.id, s.id as "softSensorId", s.tag_name as "tagName", s.name,
  s.importance_class as "importanceClass", u.name as "unitName", t.name as "siteName", t.zone,
  p.name as "proposedBy", x.proposed_at as "proposedAt", x.reason`;

/** Recalibrations and revisions of these ids that still wait for a decision. */
export async function proposalsById(
  tx: Tx,
  calibrationIds: number[],
  revisionIds: number[],
): Promise<Offered[]> {
  const found = await tx.execute<Offered>(sql`
    select 'calibrationId' as "column", ${known}, x.number, null as part from calibrations x ${around}
    where x.decision is null and x.id = any(${sql.param(calibrationIds)}::int[])
    union all
    select 'revisionId', ${known}, x.number, null from revisions x ${around}
    where x.decision is null and x.id = any(${sql.param(revisionIds)}::int[])
    order by "proposedAt"`);
  return found.rows;
}

/** Offers to hand over, of these ids, that still wait for an answer. */
export async function handoversById(tx: Tx, handoverIds: number[]): Promise<Offered[]> {
  const found = await tx.execute<Offered>(sql`
    select 'handoverId' as "column", ${known}, null as number, x.part from handovers x ${around}
    where x.answer is null and x.id = any(${sql.param(handoverIds)}::int[]) order by x.proposed_at`);
  return found.rows;
}

type Link = (path: string) => string;

export function proposalLine(one: Offered, link: Link): LetterLine {
  const calibration = one.column === 'calibrationId';
  const what = calibration ? `Recalibration ${one.number}` : `Revision ${one.number}`;
  return {
    sentence: `${what} of ${one.tagName} ${one.name} waits for your decision.`,
    link: link(calibration ? `/calibrations/${one.id}` : `/register/${one.softSensorId}/model`),
    detail: detailOf(one, 'Proposed'),
  };
}

export function handoverLine(one: Offered, link: Link): LetterLine {
  return {
    sentence: `You are asked to become the ${one.part} of ${one.tagName} ${one.name}.`,
    link: link('/duties'),
    detail: detailOf(one, 'Offered'),
  };
}

function detailOf(one: Offered, done: string): string {
  const reason = one.reason ? `: ${one.reason}` : '';
  const when = formatDate(new Date(one.proposedAt), one.zone);
  return `${one.unitName}, ${one.siteName}. Class ${one.importanceClass}. ${done} by ${one.proposedBy} on ${when}${reason}`;
}
