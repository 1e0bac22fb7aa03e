import { describe, expect, it } from 'vitest';
import { bandsOf, foldDays } from '../../src/charts/trust-layout.ts';
import { gradesInShort, poorDaysInWords } from '../../src/features/trust/poor-days.ts';
import { fieldInWords, trustSentence } from '../../src/features/trust/trust-in-words.ts';
import type { TrustCell } from '../../shared/contracts/trust.ts';
import type { TrustGrade } from '../../shared/trust.ts';

const dayMs = 86_400_000;
/** Days from a Thursday on. */
const days = (count: number) =>
  Array.from({ length: count }, (_, index) =>
    new Date(Date.UTC(2026, 9, 1) + index * dayMs).toISOString().slice(0, 10),
  );
const cellsOf = (zoneId: number, grades: readonly TrustGrade[]): TrustCell[] =>
  grades.map((grade, index) => ({
    zoneId,
    day: days(grades.length)[index] ?? '',
    grade,
    reasons: grade === 'covered' ? [] : [{ grade, text: `Because of ${grade}.` }],
  }));

describe('folding days into fields', () => {
  it('keeps days while they are wide enough', () => {
    const columns = foldDays(days(10), 100);
    expect(columns).toHaveLength(10);
    expect(columns[9]).toEqual({ first: 9, last: 9, x: 90, width: 10 });
  });

  it('makes ISO weeks of them where they are not, each as wide as its days', () => {
    const columns = foldDays(days(18), 90);
    expect(columns.map(({ first, last }) => [first, last])).toEqual([
      [0, 3],
      [4, 10],
      [11, 17],
    ]);
    expect(columns.map(({ x, width }) => [x, width])).toEqual([
      [0, 20],
      [20, 35],
      [55, 35],
    ]);
  });

  it('makes several weeks of them over years', () => {
    const columns = foldDays(days(3650), 900);
    expect(columns.length).toBeLessThanOrEqual(151);
    expect(columns.at(-1)?.last).toBe(3649);
  });

  it('draws nothing where there is no room or no day', () => {
    expect(foldDays(days(3), 0)).toEqual([]);
    expect(foldDays([], 100)).toEqual([]);
  });
});

describe('the bands of a field', () => {
  it('are worst on top, and fill it', () => {
    const bands = bandsOf(['covered', 'covered', 'missing', 'inferred']);
    expect(bands.map((band) => [band.grade, band.days])).toEqual([
      ['missing', 1],
      ['inferred', 1],
      ['covered', 2],
    ]);
    expect(bands.at(-1)?.to).toBeCloseTo(1, 12);
  });

  it('show one poor day of many', () => {
    const [poor] = bandsOf([...Array.from({ length: 90 }, () => 'covered' as const), 'missing']);
    expect((poor?.to ?? 0) - (poor?.from ?? 0)).toBeGreaterThan(0.15);
  });
});

describe('the trust map in words', () => {
  const cells = [
    ...cellsOf(1, ['missing', 'covered', 'inferred', 'settling']),
    ...cellsOf(2, ['covered', 'covered', 'inferred', 'settling']),
  ];
  const areas = [
    { id: 1, name: 'Bench' },
    { id: 2, name: 'Ship' },
  ];

  it('counts each day once, for the worst of any area', () => {
    expect(poorDaysInWords(cells)).toBe('1 of 4 days is missing, 1 inferred and 1 settling');
    expect(gradesInShort(cells.slice(4))).toBe('1 d inferred, 1 d settling');
    expect(gradesInShort(cellsOf(1, ['covered']))).toBe('covered');
    expect(gradesInShort([])).toBe('');
  });

  it('does not tell of a settling part-day at the end of a long period', () => {
    const covered = Array.from({ length: 4 }, () => 'covered' as const);
    expect(poorDaysInWords(cellsOf(1, [...covered, 'settling']))).toBe('');
    expect(poorDaysInWords(cellsOf(1, [...covered, 'settling', 'settling']))).toBe(
      '2 of 6 days are settling',
    );
  });

  it('names areas worst first, and what holds of all at once', () => {
    const sentence = trustSentence({ from: null, to: null, areas, cells, notices: [] }, areas);
    expect(sentence.map((clause) => clause.text)).toEqual([
      'Bench misses data on 1 Oct 2026. ',
      'Every area rests on inferred times on 3 Oct 2026. ',
      'Every area is settling on 4 Oct 2026. ',
      '37 % of the areas’ days are covered.',
    ]);
    expect(sentence[0]?.evidence).toEqual({ zoneId: 1 });
  });

  it('tells a field with every reason once', () => {
    expect(fieldInWords('Bench', days(4), cells.slice(0, 4))).toBe(
      'Bench, 1 Oct 2026 to 4 Oct 2026: 1 missing, 1 inferred, 1 settling and 1 covered. ' +
        'Because of missing. Because of inferred. Because of settling.',
    );
    expect(fieldInWords('Bench', ['2026-12-01'], cells)).toBe('Bench, 1 Dec 2026: in use no more.');
  });
});
