import { afterEach, beforeEach, expect, vi } from 'vitest';

/** What is printed as a warning or an error, and was not expected, fails the test. */
beforeEach(() => {
  vi.spyOn(console, 'error').mockImplementation(() => undefined);
  vi.spyOn(console, 'warn').mockImplementation(() => undefined);
});

afterEach(() => {
  const printed = [...vi.mocked(console.error).mock.calls, ...vi.mocked(console.warn).mock.calls];
  vi.restoreAllMocks();
  expect(printed).toEqual([]);
});
