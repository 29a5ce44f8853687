import type { Board } from '../../../shared/contracts/board.ts';
import { formatAge } from '../../../shared/rules/format.ts';

type Asked = Board['waiting'][number];

export interface AskedWords {
  strong: string;
  rest: string;
  note: string;
  label: string;
  to: object;
}

/** What a person is asked for, in words, with where its evidence stands. */
export function askedWords(asked: Asked, now: string): AskedWords {
  const { kind, softSensorId, tagName, name, number, by, subjectId, since } = asked;
  const what = `${tagName} ${name}`;
  const tab = (word: string) => ({ name: 'sheet', params: { id: softSensorId, tab: word } });
  const record = { name: 'calibration', params: { id: subjectId } };
  const proposed = `proposed by ${by ?? 'somebody who left'}, ${formatAge(since, now)}`;
  switch (kind) {
    case 'decide-calibration':
      return asks('Decide', `on recalibration ${number} of ${what},`, proposed, 'See evidence', record);
    case 'decide-revision':
      return asks('Decide', `on revision ${number} of ${what},`, proposed, 'See evidence', tab('model'));
    case 'enter-calibration':
      return asks(
        'Enter',
        `recalibration ${number} of ${what} in the control system,`,
        `approved by ${by}`,
        'See it',
        record,
      );
    case 'answer-handover':
      return asks('Take over', `${what}?`, `asked by ${by}, ${formatAge(since, now)}`, 'Answer', {
        name: 'duties',
      });
    case 'name-owner':
      return asks('Name an owner', `for ${what},`, `open for ${daysLate(since, now)}`, 'Choose', {
        name: 'duties',
        query: { whose: 'sites', kind: 'ownership-gap' },
      });
    case 'recalibration-late':
      return asks(
        'Recalibrate',
        `${what},`,
        `${daysLate(since, now)} late`,
        'See evidence',
        tab('recalibration'),
      );
    case 'review-late':
      return asks('Review', `${what},`, `${daysLate(since, now)} late`, 'See it', { name: 'duties' });
  }
}

const asks = (strong: string, rest: string, note: string, label: string, to: object): AskedWords => ({
  strong,
  rest,
  note,
  label,
  to,
});

/** Whole days since the day that it was due. */
function daysLate(due: string, now: string): string {
  const days = Math.max(1, Math.floor((Date.parse(now) - Date.parse(due)) / 86_400_000));
  return `${days} d`;
}
