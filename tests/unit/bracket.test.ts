import { describe, expect, it } from 'vitest';
import { moveBracket, stepBracket } from '../../src/features/period/bracket.ts';

const day = 86_400_000;
const days = Array.from({ length: 11 }, (_, index) => index * day);
const period = { from: 3 * day, to: 6 * day };

describe('a bracket that is dragged', () => {
  it.each([
    ['by its first day', 'from', 3, 1.4, { from: 1, to: 6 }],
    ['by its last day', 'to', 6, 8.6, { from: 3, to: 9 }],
    ['as a whole', 'both', 4, 6.2, { from: 5, to: 8 }],
    ['anew beside it', 'new', 7.6, 9.9, { from: 8, to: 10 }],
    ['anew, backwards', 'new', 9.9, 7.6, { from: 8, to: 10 }],
  ] as const)('%s keeps to days', (_, grip, start, end, expected) => {
    expect(moveBracket(days, period, grip, start * day, end * day)).toEqual({
      from: expected.from * day,
      to: expected.to * day,
    });
  });

  it.each([
    ['its first day past its last', 'from', 3, 9, { from: 5, to: 6 }],
    ['its last day before its first', 'to', 6, 0, { from: 3, to: 4 }],
    ['out of the span', 'both', 4, 40, { from: 7, to: 10 }],
    ['out of the span at its beginning', 'both', 4, -40, { from: 0, to: 3 }],
    ['nowhere, by a click', 'new', 4.1, 4.1, { from: 4, to: 5 }],
    ['nowhere, by a click at the end', 'new', 10, 10, { from: 9, to: 10 }],
  ] as const)('%s keeps one day at least, within the span', (_, grip, start, end, expected) => {
    expect(moveBracket(days, period, grip, start * day, end * day)).toEqual({
      from: expected.from * day,
      to: expected.to * day,
    });
  });
});

describe('a bracket that is stepped by keyboard', () => {
  it.each([
    ['from', 'ArrowLeft', { from: 2, to: 6 }],
    ['from', 'End', { from: 5, to: 6 }],
    ['to', 'ArrowRight', { from: 3, to: 7 }],
    ['to', 'PageUp', { from: 3, to: 10 }],
    ['to', 'Home', { from: 3, to: 4 }],
    ['both', 'PageDown', { from: 0, to: 3 }],
    ['both', 'ArrowUp', { from: 4, to: 7 }],
    ['both', 'End', { from: 7, to: 10 }],
  ] as const)('%s, %s', (grip, key, expected) => {
    expect(stepBracket(days, period, grip, key)).toEqual({
      from: expected.from * day,
      to: expected.to * day,
    });
  });

  it('leaves other keys to the page', () => {
    expect(stepBracket(days, period, 'both', 'Tab')).toBeNull();
  });
});
