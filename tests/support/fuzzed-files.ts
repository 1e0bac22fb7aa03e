import {
  asText,
  asWorkbook,
  asXes,
  dialects,
  encoders,
  sheetTimes,
  tableOf,
  type Dialect,
  type ExportShape,
  type LogStay,
} from './export-writer.ts';
import { escapeXml, workbookOf } from './workbook.ts';

/** A file that may be anything between an export and garbage. */
export interface FuzzedFile {
  /** What was done to it, to name it in a failure. */
  story: string;
  /** The shape by whose plan it is to be read; null where that is to be detected. */
  shape: ExportShape | null;
  bytes: Buffer;
}

type Random = ReturnType<typeof randomFrom>;

/** Repeatable pseudo-random numbers (mulberry32, public domain). */
function randomFrom(seed: number) {
  let state = seed >>> 0;
  const next = (): number => {
    state = (state + 0x6d2b79f5) >>> 0;
    let mixed = Math.imul(state ^ (state >>> 15), state | 1);
    mixed ^= mixed + Math.imul(mixed ^ (mixed >>> 7), mixed | 61);
    return ((mixed ^ (mixed >>> 14)) >>> 0) / 2 ** 32;
  };
  const below = (count: number): number => Math.floor(next() * count);
  return {
    next,
    below,
    pick: <Item>(items: readonly Item[]): Item => items[below(items.length)] as Item,
    bytes: (length: number): Buffer => Buffer.from(Array.from({ length }, () => below(256))),
  };
}

const hour = 3_600_000;
const words = ['Prüfstand', 'Final check', 'a, b; c|d\te', 'say "so"', "O'Neil", 'two\nlines', '0'];

function randomLog(random: Random): LogStay[] {
  const from = Date.UTC(1950 + random.below(90), random.below(12), 1 + random.below(28));
  return Array.from({ length: random.below(14) }, (_, index) => {
    const arrived = from + random.below(400) * hour;
    const started = arrived + random.below(9) * hour;
    const finished = started + random.below(9) * hour;
    const known = random.below(8);
    return {
      job: `LM-${random.below(6)}`,
      area: index < 3 ? 'Strip-down' : random.pick(words),
      arrived: known & 1 ? arrived : null,
      started: known === 2 ? null : started,
      finished: known & 4 ? finished : null,
      quantity: random.pick(['1', '2.5', '0', '', 'many']),
    };
  });
}

/** What can be done to the text of an export before it becomes bytes. */
const textMutations: Readonly<
  Record<string, (text: string, random: Random, dialect: Dialect) => string>
> = {
  nothing: (text) => text,
  'a line twice': (text, random) =>
    withLines(text, (lines, at) => lines.splice(at, 0, lines[at] ?? ''), random),
  'a line left out': (text, random) => withLines(text, (lines, at) => lines.splice(at, 1), random),
  'lines spliced': (text, random) =>
    withLines(
      text,
      (lines, at) =>
        lines.splice(at, 2, (lines[at] ?? '').slice(0, 9) + (lines[at + 1] ?? '').slice(5)),
      random,
    ),
  'two lines in one': (text, random) =>
    withLines(text, (lines, at) => lines.splice(at, 2, lines.slice(at, at + 2).join('')), random),
  'lines above the header': (text, random) =>
    random.pick(['Report of the week\n\n', '\n\n', 'sep=;\n', ';;;;\n', '#\r\n']) + text,
  'mixed line ends': (text, random) =>
    text.replaceAll('\n', () =>
      random.pick(['\n', '\r\n', '\r', '\n\n', '\r\r\n', '\u2028', '\v\n']),
    ),
  'returns alone': (text) => text.replaceAll('\r\n', '\n').replaceAll('\n', '\r'),
  'a quotation mark': insert(['"', '""', '"""', ' "', '" ']),
  'a zero byte': insert(['\0', '\0\0\0\0', '"\0"']),
  'a delimiter': insert([',', ';', '\t', '|', ',,,,,,']),
  'odd characters': insert([
    '\uFEFF',
    '\uFFFD',
    '\uD800',
    '𝄞',
    'e\u0301',
    '\u202E',
    '\x1a',
    '\x7f',
  ]),
  'a long cell': (text, random) => insert(['x'.repeat(501), 'y'.repeat(5000)])(text, random),
  'a very long line': (text, random) =>
    random.below(8) > 0 ? text : insert(['z'.repeat(1_100_000), 'z,'.repeat(2000)])(text, random),
  'no line end at the end': (text) => text.trimEnd(),
  'cut short': (text, random) => text.slice(0, random.below(text.length + 1)),
  'the header again': (text) => text + text.slice(0, text.indexOf('\n') + 1),
  'another delimiter half-way': (text, { below }, { delimiter }) => {
    const at = below(text.length + 1);
    return text.slice(0, at) + text.slice(at).replaceAll(delimiter, ';');
  },
};

/** What can be done to bytes. */
const byteMutations: Readonly<Record<string, (bytes: Buffer, random: Random) => Buffer>> = {
  'as it is': (bytes) => bytes,
  'bytes changed': (bytes, random) => {
    const changed = Buffer.from(bytes);
    for (let count = 1 + random.below(12); count > 0 && changed.length > 0; count--)
      changed[random.below(changed.length)] = random.below(256);
    return changed;
  },
  'bytes put in': (bytes, random) => spliced(bytes, 0, random.bytes(1 + random.below(40)), random),
  'bytes left out': (bytes, random) =>
    spliced(bytes, 1 + random.below(40), Buffer.alloc(0), random),
  'cut within': (bytes, random) => bytes.subarray(0, random.below(bytes.length + 1)),
  'its beginning lost': (bytes, random) => bytes.subarray(random.below(bytes.length + 1)),
  'followed by another encoding': (bytes, random) =>
    Buffer.concat([bytes, encodeBy(random.pick(Object.keys(encoders)), 'J9;Ofen;Prüfung\n')]),
};

/** Kinds of export that are written whole, before anything is done to their bytes. */
const writers: readonly ((random: Random) => FuzzedFile | Promise<FuzzedFile>)[] = [
  ...Array.from({ length: 6 }, () => writeText),
  writeWorkbook,
  makeWorkbook,
  writeEventLog,
];
const exportShapes: readonly ExportShape[] = ['stay', 'event', 'job'];

function writeText(random: Random): FuzzedFile {
  const dialect = random.pick(dialects);
  const shape = random.pick(exportShapes);
  const encoding = random.pick(Object.keys(encoders));
  const table = asText(tableOf(randomLog(random), shape, dialect), dialect);
  const { text, done } = happenedTo(table, textMutations, random, dialect);
  const story = [`a row per ${shape}`, dialect.name, encoding, ...done].join('; ');
  const isPlanned = random.below(3) === 0;
  return { story, shape: isPlanned ? shape : null, bytes: encodeBy(encoding, text) };
}

/** A workbook by an independent writer: what happens to it happens to the bytes of its archive. */
async function writeWorkbook(random: Random): Promise<FuzzedFile> {
  const shape = random.pick(exportShapes);
  const times = random.pick(sheetTimes);
  const bytes = await asWorkbook(randomLog(random), shape, times);
  return { story: `a workbook with a row per ${shape}, ${times}`, shape: null, bytes };
}

/** What can be done to the XML of a sheet or an event log, beside what can be done to any text. */
const xmlMutations = {
  'an odd piece of XML': insert([
    ...[
      '<',
      '>',
      '&',
      '&amp;',
      '&#0;',
      '&#x110000;',
      '&nothing;',
      ']]>',
      '<![CDATA[',
      '<!--',
      '<?',
    ],
    ...[
      '</row>',
      '<row r="1">',
      '<row r="99999999">',
      '<c r="XFD1"><v>1</v></c>',
      '<c t="s"><v>7</v></c>',
    ],
    ...['<c t="e"><v>#REF!</v></c>', '<c r="A0"/>', '<c t="b"><v>2</v></c>', '</event>', '<trace>'],
    ...['<list key="x">', '<event/>', '<date key="time:timestamp" value="soon"/>'],
  ]),
};

/** A sheet made by hand, to whose XML something happens before it is packed. */
function makeWorkbook(random: Random): FuzzedFile {
  const shape = random.pick(exportShapes);
  const [dialect] = dialects;
  if (!dialect) throw new Error('There is no dialect.');
  const rows = tableOf(randomLog(random), shape, dialect).map(
    (cells, row) =>
      `<row r="${row + 1}">${cells.map((cell) => `<c t="inlineStr"><is><t>${escapeXml(cell)}</t></is></c>`).join('')}</row>\n`,
  );
  const { text, done } = happenedTo(
    rows.join(''),
    { ...textMutations, ...xmlMutations },
    random,
    dialect,
  );
  const bytes = workbookOf({ sheets: { Log: text } });
  return { story: ['a sheet made by hand', ...done].join('; '), shape: null, bytes };
}

function writeEventLog(random: Random): FuzzedFile {
  const encoding = random.pick(['UTF-8', 'UTF-16LE with a mark', 'Windows-1252']);
  const [dialect] = dialects;
  if (!dialect) throw new Error('There is no dialect.');
  const log = asXes(randomLog(random), encoding.split(' ')[0]?.replace('LE', '') ?? 'UTF-8');
  const { text, done } = happenedTo(log, { ...textMutations, ...xmlMutations }, random, dialect);
  const story = ['an event log', encoding, ...done].join('; ');
  return { story, shape: null, bytes: encodeBy(encoding, text) };
}

/** Does up to three things to a text. */
function happenedTo(
  text: string,
  mutations: typeof textMutations,
  random: Random,
  dialect: Dialect,
): { text: string; done: string[] } {
  const done: string[] = [];
  let changed = text;
  for (let count = random.below(4); count > 0; count--) {
    const mutation = random.pick(Object.keys(mutations));
    changed = mutations[mutation]?.(changed, random, dialect) ?? changed;
    done.push(mutation);
  }
  return { text: changed, done };
}

function randomBytes(random: Random): FuzzedFile {
  const bytes = random.bytes(random.below(600));
  return { story: 'random bytes', shape: null, bytes };
}

/**
 * One of endlessly many files: an export in any shape, dialect and encoding to which something happened, or
 * bytes that never were one. The same seed and index give the same file.
 */
export async function fuzzedFile(seed: number, index: number): Promise<FuzzedFile> {
  const random = randomFrom(Math.imul(seed, 1_000_003) + index);
  const file = random.below(12) === 0 ? randomBytes(random) : await random.pick(writers)(random);
  const mutation = random.below(2) === 0 ? 'as it is' : random.pick(Object.keys(byteMutations));
  const bytes = byteMutations[mutation]?.(file.bytes, random) ?? file.bytes;
  return { ...file, story: `seed ${seed}, file ${index}: ${file.story}; ${mutation}`, bytes };
}

const encodeBy = (encoding: string, text: string): Buffer =>
  encoders[encoding]?.(text) ?? Buffer.from(text);

function insert(what: readonly string[]) {
  return (text: string, random: Random): string => {
    const at = random.below(text.length + 1);
    return text.slice(0, at) + random.pick(what) + text.slice(at);
  };
}

function withLines(
  text: string,
  change: (lines: string[], at: number) => unknown,
  random: Random,
): string {
  const lines = text.split('\n');
  change(lines, random.below(lines.length));
  return lines.join('\n');
}

function spliced(bytes: Buffer, without: number, into: Buffer, random: Random): Buffer {
  const at = random.below(bytes.length + 1);
  return Buffer.concat([bytes.subarray(0, at), into, bytes.subarray(at + without)]);
}
