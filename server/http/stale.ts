import { AppError } from '../../shared/contracts/errors.ts';

/** Somebody else saved meanwhile: the answer carries what stands now, so that both sides can be shown. */
export function stale(what: string, current: Record<string, unknown>): AppError {
  return new AppError(
    'stale',
    `Somebody else saved this ${what} while you were working on it. Compare both versions below and choose; nothing you typed is lost.`,
    { current },
  );
}
