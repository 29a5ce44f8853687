import type { Problem } from '../../shared/contracts/errors.ts';

/** What the server said when it said no: a sentence, the fields at fault, and what stands now where two people saved. */
export class ApiProblem extends Error {
  readonly problem: Problem;

  constructor(said: Problem) {
    super(said.detail);
    this.name = 'ApiProblem';
    this.problem = said;
  }

  get code(): string {
    return this.problem.code;
  }

  get status(): number {
    return this.problem.status;
  }

  static from(status: number, text: string): ApiProblem {
    try {
      const said = JSON.parse(text) as Partial<Problem>;
      if (typeof said.code === 'string' && typeof said.detail === 'string')
        return new ApiProblem(said as Problem);
    } catch {
      // No problem details: a proxy's page, or nothing at all.
    }
    return new ApiProblem({
      type: '/problems/unexpected',
      title: 'No proper answer',
      status,
      detail: 'The server gave no proper answer. Try again in a moment; nothing you typed is lost.',
      code: 'unexpected',
    });
  }

  static offline(): ApiProblem {
    return new ApiProblem({
      type: '/problems/offline',
      title: 'No connection',
      status: 0,
      detail: 'The server can’t be reached. Check the connection and try again; nothing you typed is lost.',
      code: 'offline',
    });
  }
}

/** Sentences for the fields of a form: path → what is wrong. Empty for any other error. */
export function fieldErrors(error: unknown): Record<string, string> {
  if (!(error instanceof ApiProblem)) return {};
  return Object.fromEntries((error.problem.fields ?? []).map((field) => [field.path, field.message]));
}

/** Title and sentence of any error, for an ErrorNote. */
export function sayError(error: unknown): { title: string; detail: string; reference: string | null } {
  if (error instanceof ApiProblem) {
    const { title, detail, requestId, code } = error.problem;
    return { title, detail, reference: code === 'unexpected' ? (requestId ?? null) : null };
  }
  return {
    title: 'Something went wrong on this page',
    detail: 'Load the page again; what was saved is safe.',
    reference: null,
  };
}
