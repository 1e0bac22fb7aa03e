import { describe, expect, it } from 'vitest';
import { areNamesAlike, isOneEditApart } from '../../server/methods/name-likeness.ts';

describe('two names', () => {
  it.each([
    ['Repair bench', 'REPAIR-BENCH'],
    ['Repair bench', 'Repair benchs'],
    ['Final check', 'Final checks'],
    ['Repair bench', 'Repairbench'],
    ['Repair bench', 'Repair bnech'],
    ['Calibration', 'Calibation'],
    ['Packing & dispatch', 'Packing dispatch'],
    ['Lathe 7', 'Lathe 07'],
    ['Lathe 7', 'Lathe-007'],
    ['Vérification', 'Verification'],
    ['Straße 2', 'STRASSE 2'],
  ])('%s and %s may be one', (one, other) => {
    expect([areNamesAlike(one, other), areNamesAlike(other, one)]).toEqual([true, true]);
  });

  it.each([
    ['Lathe 1', 'Lathe 2'],
    ['Lathe A', 'Lathe B'],
    ['Lathe 1', 'Lathe 11'],
    ['Oven', 'Wash'],
    ['Pre-check', 'Final check'],
    ['Test 10', 'Test 1'],
    ['In', 'On'],
    ['Bench left', 'Bench right'],
    ['--', '..'],
  ])('%s and %s are two', (one, other) => {
    expect([areNamesAlike(one, other), areNamesAlike(other, one)]).toEqual([false, false]);
  });
});

describe('one edit', () => {
  it('is a letter left out, put in, changed, or changed places with its neighbour', () => {
    expect(isOneEditApart('bench', 'benc')).toBe(true);
    expect(isOneEditApart('bench', 'beanch')).toBe(true);
    expect(isOneEditApart('bench', 'bunch')).toBe(true);
    expect(isOneEditApart('bench', 'becnh')).toBe(true);
  });

  it('is neither none nor two', () => {
    expect(isOneEditApart('bench', 'bench')).toBe(false);
    expect(isOneEditApart('bench', 'bunchy')).toBe(false);
    expect(isOneEditApart('bench', 'hbenc')).toBe(false);
    expect(isOneEditApart('', 'ab')).toBe(false);
  });
});
