import { IntakeFailure } from '../failure.ts';

const declared = /^\s*<\?xml[^>]*?\sencoding\s*=\s*["']([A-Za-z][\w.:-]*)["']/;
/** Bytes in which the declaration of the encoding stands. */
export const declaredWithin = 400;

/**
 * A decoder for an XML document by its byte order mark, by where its zero bytes stand, or by what its
 * declaration says (XML 1.0, appendix F); it takes bytes that are no text for an error.
 *
 * @param head the first bytes, `declaredWithin` or more where there are so many
 * @throws IntakeFailure where the declared encoding is not known
 */
export function xmlDecoder(head: Buffer): TextDecoder {
  const label = wideLabel(head) ?? declared.exec(head.toString('latin1', 0, declaredWithin))?.[1];
  try {
    // Where every other byte is no zero, a declaration of a wide encoding is mistaken.
    const isMistaken = wideLabel(head) === null && /^utf-?16|^ucs-?2/i.test(label ?? '');
    return new TextDecoder(isMistaken ? 'utf-8' : (label ?? 'utf-8'), { fatal: true });
  } catch {
    throw new IntakeFailure(
      'unsupported-encoding',
      `The file says that its encoding is “${label}”, which is not known.`,
      'Export it in UTF-8 and upload that.',
    );
  }
}

function wideLabel(head: Buffer): string | null {
  const [first, second] = head;
  if (first === 0xff && second === 0xfe) return 'utf-16le';
  if (first === 0xfe && second === 0xff) return 'utf-16be';
  if (first === 0x3c && second === 0) return 'utf-16le';
  if (first === 0 && second === 0x3c) return 'utf-16be';
  return null;
}
