/**
 * What can become of a row of a file, by code: why it was skipped, why it was refused, what it was
 * accepted with. The server counts by code, the client shows the words.
 */

/** Rows that say nothing: they are counted and passed over. */
export const skipReasons = {
  'blank-line': 'The line is blank.',
  'only-delimiters': 'The row holds nothing between its delimiters.',
  'repeated-header': 'The row repeats the header.',
  'above-header': 'The row stands above the header.',
  'ignored-event': 'The column plan says that this event tells nothing of a stay.',
} as const;

/** Rows that cannot be taken as they came; each is kept with its line number for download. */
export const refusalReasons = {
  'wrong-number-of-columns': 'The row has more or fewer columns than the header.',
  'quote-not-closed': 'A quotation mark opens a cell and nothing closes it.',
  'malformed-quotes': 'A quoted cell goes on after its closing quotation mark.',
  'unreadable-bytes': 'The job, the area or a time holds bytes that are no text.',
  'missing-job': 'The row names no job.',
  'missing-area': 'The row names no area.',
  'missing-event': 'The row does not say what happened.',
  'unknown-event': 'The column plan does not say what this word of the event column means.',
  'cell-too-long': 'A cell is longer than can be kept.',
  'unknown-area': 'The area is not known, and the column plan says to refuse unknown areas.',
  'unreadable-time': 'A time cannot be read.',
  'contradicts-date-order':
    'A date cannot be read in the order of day and month that the file uses.',
  'no-time': 'The row holds none of arrival, start and finish.',
  'time-before-1950': 'A time lies before 1950.',
  'time-after-receipt': 'A time lies more than a day after the file was received.',
  'start-before-arrival': 'The start lies before the arrival.',
  'finish-before-start': 'The finish lies before the start.',
  'finish-before-arrival': 'The finish lies before the arrival.',
  'unreadable-number': 'A number cannot be read.',
  'quantity-not-positive': 'The quantity is not above zero.',
} as const;

/** What an accepted row is worth knowing of; a row counts once under each that applies to it. */
export const warningReasons = {
  'no-finish': 'No finish: the job is still there, or its finish is missing.',
  'no-start': 'No start: waiting and process time cannot be told apart.',
  'finish-inferred':
    'No finish: it was taken from the job’s next start, or from how the stay ended.',
  'finish-without-start':
    'A finish event for which no start is loaded: kept, and paired once one comes.',
  'two-stays-at-once': 'The job was in another stay at the same time.',
  'ambiguous-local-time': 'A local time occurs twice, when clocks are set back.',
  'skipped-local-time': 'A local time does not occur, when clocks are set forward.',
  'area-spelling-folded': 'The area is written otherwise than where it first occurs in the file.',
  'mixed-time-forms': 'A time is written in another form than the first in its column.',
  'unreadable-bytes-elsewhere':
    'A cell other than job, area and times holds bytes that are no text; they were replaced.',
} as const;

export type SkipReason = keyof typeof skipReasons;
export type RefusalReason = keyof typeof refusalReasons;
export type WarningReason = keyof typeof warningReasons;

const sentences: Readonly<Record<string, string>> = {
  ...skipReasons,
  ...refusalReasons,
  ...warningReasons,
};

/** The sentence for a code of any of the three kinds; the code itself where it is not known here. */
export function rowReasonSentence(code: string): string {
  return sentences[code] ?? code;
}
