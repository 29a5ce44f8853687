/** The owner's limit for the size of the bias: absolute, in per cent of the value, or the larger of both. */
export interface AllowedError {
  absolute: number | null;
  percent: number | null;
}

/** The allowed error at a value, in its unit (ISO 10012: the requirement that a measurement process must meet). */
export function allowedErrorAt(allowed: AllowedError, value: number): number {
  const relative = allowed.percent === null ? 0 : (Math.abs(value) * allowed.percent) / 100;
  return Math.max(allowed.absolute ?? 0, relative);
}
