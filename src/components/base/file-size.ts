import { formatNumber } from '../../../shared/rules/format.ts';

/** A file's size in decimal units, as file managers show it: "1.2 MB". */
export function formatBytes(bytes: number): string {
  const units = ['B', 'kB', 'MB', 'GB'];
  let value = bytes;
  let step = 0;
  while (step < units.length - 1 && value >= (step === 0 ? 1000 : 999.5)) {
    value /= 1000;
    step += 1;
  }
  return `${formatNumber(value, step === 0 || value >= 100 ? 0 : 1)}\u00a0${units[step]}`;
}
