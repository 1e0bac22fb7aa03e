import { describe, expect, test } from 'vitest';
import { IntakeFailure } from '../../server/intake/failure.ts';
import { kindOfFile } from '../../server/intake/file-kind.ts';

/** The beginning of a compound file of Microsoft (MS-CFB 2.2, from memory) with a stream of this name. */
const compound = (stream: string): Buffer =>
  Buffer.concat([
    Buffer.from('d0cf11e0a1b11ae1', 'hex'),
    Buffer.alloc(1016),
    Buffer.from(`${stream}\0`, 'utf16le'),
  ]);

const refusalOf = (head: string | Buffer): IntakeFailure => {
  try {
    kindOfFile(Buffer.from(head as string));
  } catch (error) {
    if (error instanceof IntakeFailure) return error;
    throw error;
  }
  throw new Error('It is read.');
};

describe('a file', () => {
  test.each<[string, string | Buffer]>([
    ['text', 'job,area\nJ1,Bench\n'],
    ['text', ''],
    ['text', '[Job],[Area]\nJ1,Bench\n'],
    ['text', '{job};{area}\n'],
    ['text', 'BMW part,area\nJ1,Bench\n'],
    ['text', '<5 min,>5 min\n1,2\n'],
    ['text', '<job>,<area>\nJ1,Bench\n'],
    ['workbook', 'PK\u0003\u0004'],
    ['xes', '<?xml version="1.0"?>\n<!-- by Lowmoor -->\n<log xes.version="2.0">'],
    ['xes', '<xes:log xmlns:xes="http://www.xes-standard.org/">'],
    ['xes', Buffer.from('\uFEFF<?xml version="1.0"?><log>', 'utf16le')],
  ])('of the kind %s is told by its beginning', (kind, head) => {
    expect(kindOfFile(Buffer.from(head as string))).toBe(kind);
  });

  test.each<[string, string | Buffer, RegExp]>([
    ['an old workbook (XLS)', compound('Workbook'), /save it as XLSX or CSV/],
    ['an old text document (DOC)', compound('WordDocument'), /Export the log/],
    ['an old office document (XLS, DOC or PPT)', compound('Other'), /save it as XLSX or CSV/],
    ['an HTML page', '<html xmlns:x="y"><table><tr>', /save it as XLSX or CSV/],
    ['an HTML page', '<!DOCTYPE html>\n<title>Export</title>', /save it as XLSX or CSV/],
    [
      'a workbook in XML of 2003',
      '<?xml version="1.0"?><?mso-application progid="Excel.Sheet"?>',
      /XLSX/,
    ],
    ['an XML document', '<?xml version="1.0"?><orders/>', /Export the log/],
    ['an XML document', '<orders day="1">\n', /Export the log/],
    ['a JSON document', '[\n  {"job": "J1"}]', /Export the log/],
    ['a JSON document', '{"rows": []}', /Export the log/],
    ['a PDF document', '%PDF-1.7\n', /Export the log/],
    ['a gzip archive', Buffer.from([0x1f, 0x8b, 8, 0]), /Unpack it/],
    ['an empty zip archive', 'PK\u0005\u0006', /Export the log/],
    ['a PNG picture', Buffer.from('89504e470d0a1a0a', 'hex'), /Export the log/],
  ])('that is %s is named as that, with what to do', (kind, head, remedy) => {
    const { code, message } = refusalOf(head);
    expect(code).toBe('wrong-kind');
    expect(
      message.startsWith(`The file is ${kind}, which is not read. Nothing of it was kept.`),
    ).toBe(true);
    expect(message).toMatch(remedy);
  });

  test('that is a workbook behind a password says so', () => {
    expect(refusalOf(compound('EncryptedPackage'))).toMatchObject({
      code: 'protected-file',
      message:
        'The workbook is protected by a password. Nothing of it was kept. Save it without the password and upload that.',
    });
  });
});
