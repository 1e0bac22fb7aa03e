import { decodeBlock, recogniseText, type TextForm } from './decode.ts';
import { sampleBytes } from './limits.ts';

/** A file whose beginning was looked at, and which can still be read as a whole. */
export interface TextSource {
  form: TextForm;
  /** The beginning as UTF-8 with line feeds. */
  sample: Buffer;
  /** Whether the sample is all of the file. */
  isWhole: boolean;
  /** The whole text as UTF-8 with line feeds, and how many bytes of the file each block took. */
  blocks: AsyncIterable<{ text: Buffer; bytes: number }>;
}

/**
 * Looks at the beginning of a file without losing it.
 *
 * @throws IntakeFailure where it is no text that can be read
 */
export async function openText(original: AsyncIterable<Buffer>): Promise<TextSource> {
  const iterator = original[Symbol.asyncIterator]();
  const head: Buffer[] = [];
  let length = 0;
  let isWhole = false;
  while (length < sampleBytes && !isWhole) {
    const next = await iterator.next();
    if (next.done) isWhole = true;
    else length += head.push(next.value) && next.value.length;
  }
  const bytes = Buffer.concat(head);
  const form = recogniseText(bytes);
  const sample = decodeBlock(form, bytes, true);
  return { form, sample, isWhole, blocks: blocksOf(form, sample, bytes.length, iterator) };
}

async function* blocksOf(
  form: TextForm,
  sample: Buffer,
  sampleLength: number,
  rest: AsyncIterator<Buffer>,
): AsyncGenerator<{ text: Buffer; bytes: number }> {
  try {
    yield { text: sample, bytes: sampleLength };
    for (let next = await rest.next(); !next.done; next = await rest.next()) {
      yield { text: decodeBlock(form, next.value, false), bytes: next.value.length };
    }
  } finally {
    await rest.return?.();
  }
}
