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
      context.log.error(
        { err: error, requestId, method: request.method, path: request.path },
        'unforeseen error',
      );
    }
    const problem = toProblem(known, requestId);
    response.status(problem.status).type('application/problem+json').send(JSON.stringify(problem));
  };
}

function asAppError(error: unknown): AppError {
  if (error instanceof AppError) return error;
  if (error instanceof multer.MulterError) return uploadError(error);
  if (error instanceof DrizzleQueryError) {
    const known = databaseError(error.cause as DatabaseCause | undefined);
    if (known) return known;
  }
  return (
    requestError(error as { status?: number; type?: string }) ??
    new AppError(
      'unexpected',
      'This could not be done because of a fault on our side. Nothing was changed. Try again; if it stays, give an administrator the request number.',
    )
  );
}

/** What Express and its parts say of a request that can't be read or answered. */
function requestError({ status = 500, type }: { status?: number; type?: string }): AppError | null {
  if (type === 'entity.too.large') return new AppError('too-large', 'What was sent is larger than 2 MB.');
  if (type === 'entity.parse.failed') return new AppError('invalid-input', 'What was sent is not JSON.');
  if (status === 403 || status === 404) return new AppError('not-found', 'There is no such address.');
  if (status >= 400 && status < 500) return new AppError('invalid-input', 'The request can’t be read.');
  return null;
}

function uploadError(error: multer.MulterError): AppError {
  if (error.code === 'LIMIT_FILE_SIZE')
    return new AppError('too-large', 'The file is larger than is accepted here.');
  return new AppError('invalid-input', 'Send one file, in the field “file”.', {
    fields: [{ path: 'file', message: 'Send one file here.' }],
  });
}

interface DatabaseCause {
  code?: string;
  constraint?: string;
}

/** The field and the thing behind each name that must be the only one of its kind. */
const uniqueNames: Record<string, [field: string, says: string]> = {
  sites_name_key: ['name', 'There is a site with this name already. Choose another name.'],
  areas_name_key: ['name', 'There is an area with this name at this site already. Choose another name.'],
  units_name_key: ['name', 'There is a unit with this name in this area already. Choose another name.'],
  tags_name_key: ['name', 'There is a tag with this name at this site already. Choose another name.'],
  methods_name_key: ['name', 'There is a method with this name at this site already. Choose another name.'],
  sample_points_name_key: [
    'name',
    'There is a sample point with this name at this site already. Choose another name.',
  ],
  persons_email_key: ['email', 'Somebody has this address already.'],
};

/** What the database refuses although each request was checked before: met by two at once, or by odd values. */
function databaseError(cause: DatabaseCause | undefined): AppError | null {
  switch (cause?.code) {
    case '23505':
      return nameTaken(cause.constraint);
    case '40001':
    case '40P01':
      return new AppError('conflict', 'Somebody else changed this at the same moment. Try again.');
    case '22003':
      return new AppError('invalid-input', 'A number that was given is larger than any number of this kind.');
    case '22008':
      return new AppError('invalid-input', 'A date that was given lies outside the calendar.');
    case '22021':
    case '22P05':
      return new AppError('invalid-input', 'A text that was given holds a character that can’t be stored.');
    default:
      return null;
  }
}

function nameTaken(constraint: string | undefined): AppError {
  const known = uniqueNames[constraint ?? ''];
  if (!known)
    return new AppError('conflict', 'Something with this name exists already. Choose another name.');
  const [path, message] = known;
  return new AppError('conflict', message, { fields: [{ path, message }] });
}
