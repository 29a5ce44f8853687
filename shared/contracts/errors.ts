import { z } from 'zod';

/** Every code that a reply may carry, with its status. */
export const problemStatus = {
  'invalid-input': 400,
  'upload-cut-off': 400,
  'not-signed-in': 401,
  'wrong-password': 401,
  forbidden: 403,
  'foreign-origin': 403,
  'not-found': 404,
  stale: 409,
  conflict: 409,
  'link-used': 410,
  'too-large': 413,
  unreadable: 422,
  'not-enough-data': 422,
  'rate-limited': 429,
  cancelled: 409,
  unexpected: 500,
  'not-ready': 503,
} as const;
export type ProblemCode = keyof typeof problemStatus;

/** Says what is wrong with one field; `path` is dotted, as in the body ("model.terms.2.tagId"). */
export const fieldProblem = z.object({ path: z.string(), message: z.string() });
export type FieldProblem = z.infer<typeof fieldProblem>;

/** Problem details after RFC 9457, with our code, the fields at fault and, for a stale version, what stands now. */
export const problem = z.object({
  type: z.string(),
  title: z.string(),
  status: z.number().int(),
  detail: z.string(),
  code: z.string(),
  requestId: z.string().optional(),
  fields: z.array(fieldProblem).optional(),
  current: z.record(z.string(), z.unknown()).optional(),
});
export type Problem = z.infer<typeof problem>;

export interface ProblemDetails {
  fields?: FieldProblem[];
  /** The row as it stands now, where two people edited it. */
  current?: Record<string, unknown>;
}

/** An answer that is no success; its message is a sentence for a person. */
export class AppError extends Error {
  readonly code: ProblemCode;
  readonly details: ProblemDetails;

  constructor(code: ProblemCode, message: string, details: ProblemDetails = {}) {
    super(message);
    this.name = 'AppError';
    this.code = code;
    this.details = details;
  }
}

const titles: Record<ProblemCode, string> = {
  'invalid-input': 'Something given can’t be used',
  'upload-cut-off': 'The upload was cut off',
  'not-signed-in': 'Not signed in',
  'wrong-password': 'Not signed in',
  forbidden: 'Your role doesn’t allow this',
  'foreign-origin': 'The request came from another page',
  'not-found': 'Not found',
  stale: 'Somebody else saved this meanwhile',
  conflict: 'This can’t be done as things stand',
  'link-used': 'This link no longer works',
  'too-large': 'The file is too large',
  unreadable: 'The file can’t be read',
  'not-enough-data': 'Not enough data',
  'rate-limited': 'Too many attempts',
  cancelled: 'Cancelled',
  unexpected: 'Something went wrong on our side',
  'not-ready': 'Not ready yet',
};

/** Problem details of an error; `requestId` lets an administrator find the log line. */
export function toProblem(error: AppError, requestId?: string): Problem {
  return {
    type: `/problems/${error.code}`,
    title: titles[error.code],
    status: problemStatus[error.code],
    detail: error.message,
    code: error.code,
    ...(requestId ? { requestId } : {}),
    ...error.details,
  };
}
