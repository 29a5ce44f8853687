import type { z } from 'zod';
import { AppError, type FieldProblem } from '../../shared/contracts/errors.ts';

/** Parses one part of a request; what can't be used is named field by field. */
export function parsePart(schema: z.ZodType | undefined, given: unknown): unknown {
  if (!schema) return undefined;
  const parsed = schema.safeParse(given);
  if (parsed.success) return parsed.data;
  throw invalidInput(
    parsed.error.issues.map((issue) => ({ path: issue.path.join('.'), message: sentence(issue) })),
  );
}

export function invalidInput(fields: FieldProblem[]): AppError {
  const first = fields[0]!;
  const where = first.path ? ` (${first.path})` : '';
  const more = fields.length > 1 ? ` ${fields.length - 1} more below.` : '';
  return new AppError('invalid-input', `${first.message}${where}${more}`, { fields });
}

/** zod's own wording is for programmers; ours, where a schema gave one, is kept. */
function sentence(issue: z.core.$ZodIssue): string {
  if (issue.code === 'invalid_type') {
    return /received (undefined|null)/.test(issue.message)
      ? 'This is missing.'
      : `This should be ${wanted(issue.expected)}.`;
  }
  if (issue.code === 'unrecognized_keys') return `Nothing is known by the name ${issue.keys.join(', ')}.`;
  if (issue.code === 'invalid_union') return 'This fits none of the forms it may have.';
  return issue.message.replace(/^Invalid input: /, 'This can’t be used: ');
}

const wanted = (expected: string) =>
  ({
    number: 'a number',
    string: 'a text',
    boolean: 'yes or no',
    array: 'a list',
    object: 'a group of fields',
  })[expected] ?? expected;
