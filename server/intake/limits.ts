/** What a file may at most hold; beyond it the file, or the row, is refused with a sentence. */

/** Bytes of one row, however many lines its quoted cells span. */
export const rowByteLimit = 1_048_576;
/** Rows of one file. */
export const rowLimit = 20_000_000;
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

/** Bytes that an archive may unpack to in all. */
export const unpackedByteLimit = 4_294_967_296;
/** How many times as large as it is an archive may become; what unpacks to little may be any multiple. */
export const unpackedRatioLimit = 250;
export const unpackedWithoutRatio = 67_108_864;
/** Bytes of a part of a workbook that holds neither rows nor texts. */
export const partByteLimit = 33_554_432;
/** Bytes of the texts that the cells of a workbook share, with eight for each of them. */
export const sharedTextLimit = 67_108_864;
/** Sheets of a workbook. */
export const sheetLimit = 1000;
/** Rows of a sheet: the most that the format knows (ECMA-376 as it is in use). */
export const sheetRowLimit = 1_048_576;
/** Characters of one cell of a sheet: the most that the format knows. */
export const sheetCellLimit = 32_767;
/** Characters of XML in which some tag has to end, and how deep elements may lie in one another. */
export const xmlPieceLimit = 2_097_152;
export const xmlDepthLimit = 100;
