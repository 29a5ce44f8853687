import { hash, verify } from '@node-rs/argon2';

// OWASP's argon2id minimum: 19 MiB, two passes, one lane.
const cost = { memoryCost: 19_456, timeCost: 2, parallelism: 1 };

export const hashPassword = (password: string): Promise<string> => hash(password, cost);

/** Takes as long for an unknown person as for a known one, so that time tells nothing. */
export async function passwordMatches(stored: string | null | undefined, password: string): Promise<boolean> {
  if (stored) return verify(stored, password);
  await verify(await (decoy ??= hashPassword('nobody has this password')), password);
  return false;
}
let decoy: Promise<string> | undefined;
