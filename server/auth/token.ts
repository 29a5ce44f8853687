import { createHash, randomBytes } from 'node:crypto';

/** What is kept of a secret that only its holder may know. */
export const hashToken = (token: string): string => createHash('sha256').update(token).digest('hex');

export const newToken = (): string => randomBytes(32).toString('base64url');
