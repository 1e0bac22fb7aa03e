/** What a file may at most hold; beyond it the file, or the row, is refused with a sentence. */

/** Bytes of one row, however many lines its quoted cells span. */
export const rowByteLimit = 1_048_576;
/** Columns of the header. */
export const columnLimit = 1000;
/** Characters of what names a job, an area or a record: these are keys of the database's indexes. */
export const keyLengthLimit = 500;
/** Characters of any other cell that is kept. */
export const cellLengthLimit = 4000;
/** Areas that one file may name. */
export const areaLimit = 2000;
/** Bytes of the beginning of a file from which its dialect and columns are guessed. */
export const sampleBytes = 262_144;
