import { expect } from 'vitest';

/** Equal up to 1e-9 of the expected value; null equals null only. */
export function closeTo(actual: number | null | undefined, expected: number | null): void {
  if (expected === null) {
    expect(actual).toBeNull();
    return;
  }
  const tolerance = 1e-9 * Math.max(Math.abs(expected), 1e-9);
  expect(actual).not.toBeNull();
  expect(Math.abs((actual ?? NaN) - expected)).toBeLessThanOrEqual(tolerance);
}
