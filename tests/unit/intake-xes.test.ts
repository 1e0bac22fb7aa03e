import { Readable } from 'node:stream';
import fc from 'fast-check';
import { describe, expect, test } from 'vitest';
import { detect } from '../../server/intake/detect/detect.ts';
import { IntakeFailure } from '../../server/intake/failure.ts';
import { previewOf } from '../../server/intake/preview.ts';
import { readText } from '../support/read-text.ts';
import { escapeXml, opened, rowsOf } from '../support/workbook.ts';

/**
 * A log with the elements of IEEE 1849-2016, section 4 and annex A, from memory: extensions, globals,
 * classifiers, attributes of attributes, a list, and the life cycle of activities.
 */
const log = `<?xml version="1.0" encoding="UTF-8" ?>
<!-- Export of Lowmoor Instrument Works -->
<log xes.version="1849-2016" xes.features="nested-attributes" xmlns="http://www.xes-standard.org/">
  <extension name="Concept" prefix="concept" uri="http://www.xes-standard.org/concept.xesext"/>
  <extension name="Lifecycle" prefix="lifecycle" uri="http://www.xes-standard.org/lifecycle.xesext"/>
  <global scope="trace"><string key="concept:name" value="UNKNOWN"/></global>
  <global scope="event">
    <string key="concept:name" value="UNKNOWN"/>
    <date key="time:timestamp" value="1970-01-01T00:00:00.000+00:00"/>
  </global>
  <classifier name="Activity" scope="event" keys="concept:name lifecycle:transition"/>
  <string key="concept:name" value="the log’s own name"/>
  <trace>
    <string key="concept:name" value="J1"><string key="note" value="nested"/></string>
    <int key="units" value="5"/>
    <event>
      <string key="concept:name" value="Bench &amp; Oven"/>
      <string key="lifecycle:transition" value="schedule"/>
      <date key="time:timestamp" value="2026-03-02T08:00:00.000+01:00"/>
    </event>
    <event>
      <string key="org:resource" value="Zo&#xEB;"/>
      <string key="concept:name" value="Bench &amp; Oven"/>
      <string key="lifecycle:transition" value="START"/>
      <date key="time:timestamp" value="2026-03-02T08:15:00.000+01:00"/>
      <list key="parts"><values><string key="part" value="P1"/></values></list>
    </event>
    <event>
      <string key="concept:name" value="Bench &amp; Oven"/>
      <string key="lifecycle:transition" value="suspend"/>
      <date key="time:timestamp" value="2026-03-02T08:20:00.000+01:00"/>
    </event>
    <event>
      <string key="concept:name" value="Bench &amp; Oven"/>
      <string key="lifecycle:transition" value="complete"/>
      <date key="time:timestamp" value="2026-03-02T09:00:00.000+01:00"/>
      <boolean key="rework" value="false"/>
      <float key="cost:total" value="1.5"/>
      <id key="identity:id" value="f81d4fae-7dec-11d0-a765-00a0c91e6bf6"/>
    </event>
  </trace>
  <event>
    <string key="concept:name" value="Bench &amp; Oven"/>
    <string key="lifecycle:transition" value="complete"/>
    <date key="time:timestamp" value="2026-03-02T10:00:00.000+01:00"/>
  </event>
</log>
`;

const withoutLifeCycle = log.replace(/ *<string key="lifecycle:transition".*\n/g, '');

const failureOf = async (bytes: Buffer) => {
  try {
    await rowsOf(bytes);
  } catch (error) {
    if (error instanceof IntakeFailure) return error;
    throw error;
  }
  throw new Error('It was read.');
};

describe('an event log', () => {
  test('has a column for each attribute that is declared or used, and a row for each event', async () => {
    const file = await opened(Buffer.from(log), {}, 700);
    expect(file.kind).toBe('xes');
    const { header, headerLine } = detect({ file, plan: null, timeZone: 'UTC' });
    expect(headerLine).toBe(0);
    expect(header).toEqual([
      'trace concept:name',
      'event concept:name',
      'event time:timestamp',
      'trace units',
      'event lifecycle:transition',
      'event org:resource',
      'event rework',
      'event cost:total',
      'event identity:id',
    ]);
    const rows = await rowsOf(Buffer.from(log), {}, header, 311);
    expect(rows.map(({ line }) => line)).toEqual([1, 2, 3, 4, 5]);
    expect(rows[1]?.cells).toEqual([
      ...['J1', 'Bench & Oven', '2026-03-02T08:15:00.000+01:00', '5', 'START', 'Zoë', '', '', ''],
    ]);
    expect(rows[1]?.raw).toBe(
      'concept:name=J1; units=5; org:resource=Zoë; concept:name=Bench & Oven; lifecycle:transition=START; time:timestamp=2026-03-02T08:15:00.000+01:00',
    );
    expect(rows[4]?.cells[0]).toBe('');
  });

  test('is read by the keys of the standard, each event for what it says', async () => {
    const { plan, rows } = await readText(log);
    expect(plan).toMatchObject({
      shape: 'event',
      columns: {
        job: 'trace concept:name',
        area: 'event concept:name',
        event: 'event lifecycle:transition',
        time: 'event time:timestamp',
        resource: 'event org:resource',
        record: 'event identity:id',
      },
      eventWords: {
        arrived: ['schedule', 'assign'],
        started: ['start'],
        finished: ['complete'],
        cancelled: ['ate_abort', 'pi_abort', 'withdraw'],
      },
      headerLine: 0,
    });
    expect(
      rows.map(({ line, outcome, reason, arrived, started, finished }) => [
        ...[line, outcome, reason ?? arrived ?? started ?? finished],
      ]),
    ).toEqual([
      [1, 'accepted', '2026-03-02T07:00:00.000Z'],
      [2, 'accepted', '2026-03-02T07:15:00.000Z'],
      [3, 'skipped', 'ignored-event'],
      [4, 'accepted', '2026-03-02T08:00:00.000Z'],
      [5, 'refused', 'missing-job'],
    ]);
  });

  test('without a life cycle tells finishes alone, and says why', async () => {
    const file = await opened(Buffer.from(withoutLifeCycle));
    const { plan, reasons } = detect({ file, plan: null, timeZone: 'UTC' });
    expect(plan).toMatchObject({
      shape: 'stay',
      columns: { job: 'trace concept:name', finished: 'event time:timestamp' },
    });
    expect(reasons.find(({ about }) => about === 'finished')?.reason).toMatch(
      /No event says where it stands in a life cycle/,
    );
    expect((await readText(withoutLifeCycle)).rows[0]).toMatchObject({
      started: null,
      finished: '2026-03-02T07:00:00.000Z',
    });
  });

  test('whose keys are others is not guessed at, and what is missing is said', async () => {
    const other = log.replaceAll('concept:name', 'label').replaceAll('time:timestamp', 'at');
    const file = await opened(Buffer.from(other));
    const { plan, missing } = detect({ file, plan: null, timeZone: 'UTC' });
    expect(plan).toBeNull();
    expect(missing).toHaveLength(3);
    const columns = {
      job: 'trace label',
      area: 'event label',
      event: 'event lifecycle:transition',
      time: 'event at',
    };
    const eventWords = { started: ['start'], finished: ['complete'], ignored: ['suspend'] };
    const read = await readText(other, { plan: { shape: 'event', columns, eventWords } });
    expect(read.rows[1]).toMatchObject({ job: 'J1', started: '2026-03-02T07:15:00.000Z' });
  });

  test('is read by a plan that was made for a table with a header line', async () => {
    const columns = {
      job: 'trace concept:name',
      area: 'event concept:name',
      finished: 'event time:timestamp',
    };
    const { rows } = await readText(log, { plan: { shape: 'stay', columns, headerLine: 3 } });
    expect(rows.map(({ line }) => line)).toEqual([1, 2, 3, 4, 5]);
  });

  test.each<[string, Buffer]>([
    [
      'a prefix',
      Buffer.from(log.replace(/<(\/?)(?=[a-z])/g, '<$1xes:').replace('xmlns=', 'xmlns:xes=')),
    ],
    ['no namespace', Buffer.from(log.replace(/ xmlns="[^"]*"/, ''))],
    ['a byte order mark', Buffer.from(`\uFEFF${log}`)],
    ['UTF-16 with its mark', Buffer.from(`\uFEFF${log}`, 'utf16le')],
    ['UTF-16 without a mark', Buffer.from(log.replace('UTF-8', 'UTF-16'), 'utf16le')],
    ['UTF-16 from the great end', Buffer.from(`\uFEFF${log}`, 'utf16le').swap16()],
    [
      'ISO 8859-1',
      Buffer.from(
        log.replace('UTF-8', 'ISO-8859-1').replace('&#xEB;', 'ë').replace('’', "'"),
        'latin1',
      ),
    ],
    ['Windows-1252', Buffer.from(log.replace('UTF-8', 'windows-1252').replace('’', "'"), 'latin1')],
    ['a declaration that is mistaken', Buffer.from(log.replace('UTF-8', 'UTF-16'))],
  ])('with %s is read the same, however it is cut into blocks', async (_, bytes) => {
    const { rows } = await readText(bytes);
    expect(rows).toEqual((await readText(log)).rows);
    const header = ['', '', ''];
    expect(await rowsOf(bytes, {}, header, 3)).toEqual(await rowsOf(Buffer.from(log)));
  });

  test.each<[string, string | Buffer, string, RegExp]>([
    [
      'with a document type declaration',
      log.replace('<log', '<!DOCTYPE log [<!ENTITY a "b">]>\n<log'),
      'unsafe-xml',
      /brings a document type declaration \(DOCTYPE\) at line 3/,
    ],
    [
      'with an entity of its own',
      log.replace('&amp;', '&lowmoor;'),
      'unsafe-xml',
      /uses an entity beyond the five that XML knows by itself at line 17/,
    ],
    [
      'that breaks off',
      log.slice(0, -40),
      'broken-file',
      /no proper XML at line \d+: unclosed tag/,
    ],
    [
      'with a tag that closes another',
      log.replace('</trace>', '</track>'),
      'broken-file',
      /no proper XML at line 41: unexpected close tag/,
    ],
    [
      'with bytes that are no text',
      Buffer.from(log.replace('Bench', '\u00FF'), 'latin1'),
      'unsupported-encoding',
      /no text in UTF-8/,
    ],
    ['in an unknown encoding', log.replace('UTF-8', 'EBCDIC'), 'unsupported-encoding', /“EBCDIC”/],
    [
      'whose attributes are longer than a row',
      log.replace('"J1"', `"${'x'.repeat(1_100_000)}"`),
      'row-too-long',
      /Row 1 holds more than 1,048,576 bytes/,
    ],
    [
      'with a value without end',
      log.replace('"J1"', `"${'x'.repeat(2_500_000)}"`),
      'unsafe-xml',
      /a piece longer than/,
    ],
  ])('%s is refused with a sentence', async (_, text, code, sentence) => {
    const failure = await failureOf(Buffer.from(text as string));
    expect(failure.message).toMatch(sentence);
    expect(failure.message).toMatch(/Nothing of it was kept/);
    expect(failure.code).toBe(code);
  });

  test('that is cut for a preview shows the events that are whole', async () => {
    const event = /<event>[\s\S]*?<\/event>/.exec(log)?.[0] ?? '';
    const long = log.replace(event, event.repeat(3000)).slice(0, 262_144);
    const shown = await previewOf({
      open: () => Readable.from([Buffer.from(long)]),
      isCut: true,
      plan: null,
      savedPlans: [],
      timeZone: 'UTC',
      receivedAt: new Date('2026-06-01T00:00:00Z'),
      knownAreas: new Map(),
    });
    expect(shown).toMatchObject({ fileKind: 'xes', encoding: null, delimiter: null, sheets: [] });
    expect(shown.rows).toHaveLength(50);
    expect(shown.rows[0]).toMatchObject({ line: 1, arrived: '2026-03-02T07:00:00.000Z' });
  });

  test('of any attributes gives them back', async () => {
    const value = fc
      .string({ unit: 'grapheme', maxLength: 12 })
      .filter((text) => !/[\p{Cc}\p{Cs}\uFFFE\uFFFF]/u.test(text));
    const events = fc.array(fc.tuple(value, value), { minLength: 1, maxLength: 20 });
    await fc.assert(
      fc.asyncProperty(events, fc.integer({ min: 1, max: 500 }), async (told, blockBytes) => {
        const xml = told.map(([a, b]) => `<event>${attribute('a', a)}${attribute('b', b)}</event>`);
        const text = `<log><trace>${xml.join('')}</trace></log>`;
        const read = await rowsOf(Buffer.from(text), {}, [], blockBytes);
        expect(read.map(({ cells }) => cells)).toEqual(told);
      }),
      { numRuns: 100 },
    );
  });

  test('that somebody broke anywhere ends in rows or in a sentence', async () => {
    const piece = fc.constantFrom(
      ...['<', '>', '&', '"', '/', '<event>', '</event>', '<trace>', '<log>', 'key=""', '<global>'],
      ...[
        '<![CDATA[',
        '<!--',
        '<?x',
        '\u0000',
        '&#0;',
        '<global scope="event">',
        '</log>',
        '\uFFFF',
      ],
    );
    await fc.assert(
      fc.asyncProperty(piece, fc.nat(log.length), fc.nat(log.length), async (...how) => {
        const [inserted, at, length] = how;
        try {
          await readText((log.slice(0, at) + inserted + log.slice(at)).slice(0, length + 200));
        } catch (error) {
          if (!(error instanceof IntakeFailure)) throw error;
          expect(error.message).toMatch(/\.$/);
        }
      }),
      { numRuns: 500 },
    );
  });
});

const attribute = (key: string, value: string) =>
  `<string key="${key}" value="${escapeXml(value)}"/>`;
