import { AppError } from '../../shared/contracts/errors.ts';

/** Who saved last, and when. */
export interface LastSave {
  savedBy: string;
  savedAt: string;
}

/**
 * Somebody else saved meanwhile: the answer carries what stands now, and whose it is, so that both sides can be shown.
 */
export function stale(
  what: string,
  current: Record<string, unknown>,
  last: LastSave | null = null,
): AppError {
  return new AppError(
    'stale',
    `Somebody else saved this ${what} while you were working on it. Compare both versions below and choose; nothing you typed is lost.`,
    { current: { ...current, ...last } },
  );
}
