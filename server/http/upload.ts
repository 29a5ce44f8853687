import type { Request, Response } from 'express';
import multer from 'multer';
import { AppError } from '../../shared/contracts/errors.ts';
import type { Context } from '../context.ts';
import { type StoredFile, storeFile } from '../features/files/service.ts';

export type StoredUpload = StoredFile;

/** Takes the one file of a multipart request straight into the database, in pieces, and returns its row. */
export async function receiveUpload(
  context: Context,
  request: Request,
  response: Response,
  wanted: { siteId: number; personId: number; maxBytes: number },
): Promise<StoredUpload> {
  let stored: StoredUpload | undefined;
  let failure: Error | undefined;
  const storage: multer.StorageEngine = {
    _handleFile(_request, file, done) {
      storeFile(context, file.stream, { ...wanted, name: file.originalname }).then(
        (row) => {
          stored = row;
          done(null, {});
        },
        (error: Error) => {
          failure = error;
          file.stream.resume();
          done(error);
        },
      );
    },
    _removeFile(_request, _file, done) {
      done(null);
    },
  };
  const upload = multer({
    storage,
    defParamCharset: 'utf8',
    limits: { files: 1, fields: 10, fieldSize: 10_000, parts: 12 },
  });
  await new Promise<void>((resolve, reject) => {
    upload.single('file')(request, response, (error: unknown) =>
      error ? reject(error as Error) : resolve(),
    );
  }).catch((error: unknown) => {
    if (error instanceof multer.MulterError || error instanceof AppError) throw error;
    if (failure && !request.destroyed && !/unexpected end|aborted/i.test(failure.message)) throw failure;
    throw new AppError('upload-cut-off', 'The upload was cut off before the end. Send the file again.');
  });
  if (!stored) {
    throw new AppError('invalid-input', 'Choose a file first.', {
      fields: [{ path: 'file', message: 'Choose a file first.' }],
    });
  }
  return stored;
}
