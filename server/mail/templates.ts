import { plural } from '../../shared/rules/format.ts';
import { type Body, type LetterLine, type Part, writeLetter } from './letter.ts';

export interface LinkFigures {
  name: string;
  hours: number;
}

/** Mails with a one-time link: to set a first password or a new one. */
export function linkLetter(
  purpose: 'set-password' | 'reset-password',
  figures: LinkFigures,
  link: string,
): Body {
  const first = purpose === 'set-password';
  const lasts = figures.hours >= 48 ? `${figures.hours / 24} days` : `${figures.hours} hours`;
  return writeLetter(first ? 'Set your password for Cupel' : 'Set a new password for Cupel', [
    { part: 'paragraph', text: `Hello ${figures.name},` },
    {
      part: 'paragraph',
      text: first
        ? 'an administrator has added you to Cupel, the register of soft sensors. Set your password to sign in.'
        : 'somebody asked for a new password for this address. If it was not you, ignore this mail: nothing changes.',
    },
    { part: 'action', label: first ? 'Set your password' : 'Set a new password', link },
    { part: 'small', text: `The link works once, for ${lasts}.` },
  ]);
}

/** What a digest tells, by what it asks for. */
export interface DigestFigures {
  name: string;
  late: LetterLine[];
  today: LetterLine[];
  coming: LetterLine[];
  gaps: LetterLine[];
  decisions: LetterLine[];
  handovers: LetterLine[];
  /** People whose mail server refuses our mails, with its words: for the managers of their sites. */
  unreachable: string[];
  dutiesLink: string;
}

/** A person's mail of the day: what is late first, then what comes, then what waits for their word. */
export function digestLetter(figures: DigestFigures): Body {
  const lists: [string, LetterLine[]][] = [
    ['Late', figures.late],
    ['Due today', figures.today],
    ['Coming', figures.coming],
    ['Without an owner or a deputy', figures.gaps],
    ['Waiting for your decision', figures.decisions],
    ['Handed over to you', figures.handovers],
  ];
  return writeLetter(digestSubject(figures), [
    { part: 'paragraph', text: `Hello ${figures.name},` },
    { part: 'paragraph', text: 'this is what your soft sensors need.' },
    ...lists
      .filter(([, lines]) => lines.length > 0)
      .map(([title, lines]): Part => ({ part: 'list', title, lines })),
    { part: 'action', label: 'Open your duties', link: figures.dutiesLink },
    ...figures.unreachable.map((text): Part => ({ part: 'small', text })),
    {
      part: 'small',
      text:
        'You get this because Cupel names you as owner, deputy, approver or manager of these soft sensors. ' +
        'One such mail a day at most, in the morning of your site; each thing is told once at each stage. The links ask you to sign in.',
    },
  ]);
}

/** "2 late, 1 due soon, 1 waits for your decision". */
function digestSubject({ late, today, coming, gaps, decisions, handovers }: DigestFigures): string {
  const counts: [LetterLine[], (n: number) => string][] = [
    [late, (n) => `${n} late`],
    [today, (n) => `${n} due today`],
    [coming, (n) => `${n} due soon`],
    [gaps, (n) => plural(n, 'ownership gap')],
    [decisions, (n) => `${n} ${n === 1 ? 'waits' : 'wait'} for your decision`],
    [handovers, (n) => `${n} handed over to you`],
  ];
  const words = counts.filter(([lines]) => lines.length > 0).map(([lines, say]) => say(lines.length));
  return `Cupel: ${words.join(', ')}`;
}
