import type { GapCode } from '../../../shared/contracts/duties.ts';
import type { OwnerPart, Responsibility } from '../../../shared/contracts/ownership.ts';
import { formatDay, plural } from '../../../shared/rules/format.ts';

interface Named {
  name: string;
}
export interface Gap {
  codes: readonly GapCode[];
  owner: Named | null;
  deputy: Named | null;
  /** Date at the site since when it is so; null where it is not known. */
  since: string | null;
  /** The site's own day now. */
  today: string;
  siteName: string;
}

const article: Record<OwnerPart, string> = { owner: 'an owner', deputy: 'a deputy' };
export const partOf = (code: GapCode): OwnerPart => (code.includes('deputy') ? 'deputy' : 'owner');
/** The parts that have to be filled, owner first. */
export const missingParts = (codes: readonly GapCode[]): OwnerPart[] =>
  (['owner', 'deputy'] as const).filter((part) => codes.some((code) => partOf(code) === part));

/** "Name an owner", "Name an owner and a deputy". */
export const nameWords = (codes: readonly GapCode[]): string =>
  `Name ${missingParts(codes)
    .map((part) => article[part])
    .join(' and ')}`;

/** "No owner since 14 Nov: Hanne Solberg left". */
export function gapWords(gap: Gap): string {
  const parts = missingParts(gap.codes);
  const since = gap.since === null ? '' : ` since ${formatDay(gap.since, 'UTC', `${gap.today}T12:00:00Z`)}`;
  const why = [...new Set(gap.codes.map((code) => whyWords(code, gap)))].filter((words) => words !== '');
  return `No ${parts.join(' and no ')}${since}${why.length > 0 ? `: ${why.join(', ')}` : ''}`;
}

function whyWords(code: GapCode, gap: Gap): string {
  const name = gap[partOf(code)]?.name;
  if (name === undefined) return '';
  if (code.endsWith('deactivated')) return `${name} left`;
  return code.endsWith('no-engineer') ? `${name} is no engineer of ${gap.siteName} any more` : '';
}

/** "Owner of 4 soft sensors and deputy of 2." What a person answers for, before they are deactivated. */
export function answersForWords(rows: readonly Responsibility[]): string {
  const count = (part: Responsibility['part']) => rows.filter((row) => row.part === part).length;
  const parts = (['owner', 'deputy', 'approver'] as const).filter((part) => count(part) > 0);
  if (parts.length === 0) return 'Answers for no soft sensor.';
  const [first, ...rest] = parts.map((part, nth) =>
    nth === 0 ? `${part} of ${plural(count(part), 'soft sensor')}` : `${part} of ${count(part)}`,
  );
  const words = [first!, ...rest];
  const last = words.pop()!;
  const said = words.length === 0 ? last : `${words.join(', ')} and ${last}`;
  return `${said[0]!.toUpperCase()}${said.slice(1)}.`;
}

/** "Deactivating opens a handover list for the plant managers of Tarnby Works." Null where nothing is left open. */
export function handoverListWords(rows: readonly Responsibility[]): string | null {
  const sites = [...new Set(rows.filter(({ opensGap }) => opensGap).map(({ siteName }) => siteName))];
  if (sites.length === 0) return null;
  const last = sites.pop()!;
  return `Deactivating opens a handover list for the plant managers of ${sites.length > 0 ? `${sites.join(', ')} and ` : ''}${last}.`;
}
