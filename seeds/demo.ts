import type { Context } from '../server/context.ts';

export async function seedDemo(_context: Context): Promise<void> {}

export function demoSignIns(_context: Context): string[] {
  return [];
}
