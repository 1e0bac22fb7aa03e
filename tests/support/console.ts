import { afterAll, afterEach, expect } from 'vitest';

const printed: unknown[][] = [];

/** What is printed as a warning or an error, and was not expected, fails the test. */
console.error = (...words: unknown[]) => printed.push(words);
console.warn = (...words: unknown[]) => printed.push(words);

const expectSilence = () => {
  expect(printed.splice(0)).toEqual([]);
};
afterEach(expectSilence);
/** Before the first test, after the last, and while the file was read. */
afterAll(expectSilence);
