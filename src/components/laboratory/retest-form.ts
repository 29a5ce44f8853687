import type { RetestAnswer } from '../../../shared/contracts/laboratory.ts';
import { readTypedResult } from '../../../shared/rules/typed-result.ts';

/** An answer to a re-test as it is typed. */
export interface AnswerForm {
  answer: 'result' | 'no-bottle' | 'not-needed' | null;
  value: string;
  then: 'release' | 'withdraw' | 'hold' | null;
  note: string;
}

export const blankAnswer = (): AnswerForm => ({ answer: null, value: '', then: null, note: '' });

export const answerChoices = [
  { value: 'result', label: 'Yes: a second result' },
  { value: 'no-bottle', label: 'No bottle left' },
  { value: 'not-needed', label: 'Not needed any more' },
];

export const thenChoices = [
  { value: 'hold', label: 'It stays held, for an engineer to decide' },
  { value: 'withdraw', label: 'It is refused: nothing is judged by it' },
  { value: 'release', label: 'It counts from now on' },
];

/** What is sent, or a sentence for each field that can’t be used. */
export function readAnswer({ answer, value, then, note }: AnswerForm): {
  body?: RetestAnswer;
  errors?: Record<string, string>;
} {
  if (answer === null) return { errors: { answer: 'Choose an answer.' } };
  if (answer === 'result') {
    const read = readTypedResult(value);
    return read.ok ? { body: { answer, value, note } } : { errors: { value: read.message } };
  }
  if (then === null) return { errors: { then: 'Choose what becomes of the held result.' } };
  return { body: { answer, then, note } };
}
