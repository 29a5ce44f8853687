import { DrizzleQueryError } from 'drizzle-orm';
import type { ErrorRequestHandler, RequestHandler } from 'express';
import multer from 'multer';
import { AppError, toProblem } from '../../shared/contracts/errors.ts';
import type { Context } from '../context.ts';

export const notFound: RequestHandler = () => {
  throw new AppError('not-found', 'There is no such address.');
};

/** Every error leaves as problem details; what we did not foresee is logged whole and told without its inside. */
export function problems(context: Context): ErrorRequestHandler {
  return (error: unknown, request, response, next) => {
    if (response.headersSent) return next(error);
    const requestId = String(response.locals.requestId ?? '');
    const known = asAppError(error);
    if (known.code === 'unexpected') {
      context.log.error({ error, requestId, method: request.method, path: request.path }, 'unforeseen error');
    }
    const problem = toProblem(known, requestId);
    response.status(problem.status).type('application/problem+json').send(JSON.stringify(problem));
  };
}

function asAppError(error: unknown): AppError {
  if (error instanceof AppError) return error;
  if (error instanceof multer.MulterError) return uploadError(error);
  if (error instanceof DrizzleQueryError) {
    const known = databaseError(error);
    if (known) return known;
  }
  const status = (error as { status?: number }).status;
  const type = (error as { type?: string }).type;
  if (type === 'entity.too.large') return new AppError('too-large', 'What was sent is larger than 2 MB.');
  if (type === 'entity.parse.failed') return new AppError('invalid-input', 'What was sent is not JSON.');
  if (status === 400) return new AppError('invalid-input', 'The request can’t be read.');
  return new AppError(
    'unexpected',
    'This could not be done because of a fault on our side. Nothing was changed. Try again; if it stays, give an administrator the request number.',
  );
}

function uploadError(error: multer.MulterError): AppError {
  if (error.code === 'LIMIT_FILE_SIZE')
    return new AppError('too-large', 'The file is larger than is accepted here.');
  return new AppError('invalid-input', 'Send one file, in the field “file”.', {
    fields: [{ path: 'file', message: 'Send one file here.' }],
  });
}

/** Constraints that two requests at once can meet although each was checked before. */
function databaseError(error: DrizzleQueryError): AppError | null {
  const cause = error.cause as { code?: string; constraint?: string } | undefined;
  if (cause?.code === '23505' && /_(name|email)_key$/.test(cause.constraint ?? '')) {
    return new AppError('conflict', 'Something with this name exists already. Choose another name.');
  }
  if (cause?.code === '23505' || cause?.code === '40001' || cause?.code === '40P01') {
    return new AppError('conflict', 'Somebody else changed this at the same moment. Try again.');
  }
  return null;
}
