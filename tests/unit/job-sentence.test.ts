import { describe, expect, it } from 'vitest';
import type { JobRecord } from '../../shared/contracts/jobs.ts';
import { jobSentence } from '../../src/features/jobs/job-sentence.ts';

const record = (areaName: string, given: Partial<JobRecord> = {}): JobRecord => ({
  areaId: areaName.length,
  areaName,
  pass: 1,
  entered: '2026-10-24T06:00:00.000Z',
  arrived: null,
  started: '2026-10-24T07:00:00.000Z',
  finished: '2026-10-24T10:00:00.000Z',
  left: '2026-10-24T10:00:00.000Z',
  finishInferred: false,
  ending: null,
  queueSeconds: 3600,
  processSeconds: 10_800,
  flowSeconds: 14_400,
  quantity: null,
  told: {},
  record: { uploadId: 1, line: 2 },
  versions: [],
  ...given,
});
const words = (records: JobRecord[]) => jobSentence(records, 'UTC');

describe('the sentence of a job', () => {
  it('of one record', () => {
    expect(words([record('Sawing')])).toBe(
      'It left Sawing 24 Oct 2026, 10:00 and was not seen since. 1 record in 1 area over 4.0 h.',
    );
  });

  it('says where it is, and since when', () => {
    const text = words([
      record('Sawing'),
      record('Turning', { entered: '2026-10-24T10:00:00.000Z', left: null }),
    ]);
    expect(text).toContain('It is in Turning since 24 Oct 2026, 10:00.');
    expect(text).toContain('2 records in 2 areas');
  });

  it('says where it came back, once and more often', () => {
    const again = (name: string, times: number) =>
      Array.from({ length: times }, () => record(name));
    expect(words([...again('Sawing', 2), ...again('Turning', 3)])).toContain(
      'It came back to Sawing once and Turning 2 times.',
    );
  });

  it('does not take a new pass for a return', () => {
    const text = words([record('Sawing'), record('Sawing', { pass: 2 })]);
    expect(text).toContain('2 records in 1 area in 2 passes.');
    expect(text).not.toContain('came back');
  });

  it('says which finishes are inferred', () => {
    expect(words([record('Sawing', { finishInferred: true })])).toContain(
      '1 finish was not recorded and is inferred from later starts.',
    );
    const two = [record('A', { finishInferred: true }), record('B', { finishInferred: true })];
    expect(words(two)).toContain(
      '2 finishes were not recorded and are inferred from later starts.',
    );
  });

  it('knows only what is told: a finish alone has no length', () => {
    const text = words([record('Sawing', { entered: null, started: null })]);
    expect(text).toBe(
      'It left Sawing 24 Oct 2026, 10:00 and was not seen since. 1 record in 1 area.',
    );
  });
});
