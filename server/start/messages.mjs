/** Something that a person can mend: its message is shown as it is, without a stack trace. */
export class Failure extends Error {}

export const say = (sentence) => console.log(sentence);

/** The sentence for any error, expected or not. */
export function sentenceFor(error) {
  if (error instanceof Failure) return error.message;
  if (error.code === 'EACCES' || error.code === 'EPERM') {
    return (
      `${error.path ?? 'A file'} belongs to another user. Run this as that user, ` +
      'or name a folder of your own: CUPEL_DATA_DIR=/some/folder npm start'
    );
  }
  if (error.code === 'ENOSPC') return 'The disk is full. Free some space, then try again.';
  return `Unexpected error: ${error.message}`;
}
