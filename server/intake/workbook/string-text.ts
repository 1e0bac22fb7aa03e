const escaped = /_x([0-9A-Fa-f]{4})_/g;

/** Text of a workbook with the characters that XML cannot hold (ECMA-376 part 1, section 22.9.2.19, ST_Xstring). */
export const stringText = (written: string): string =>
  written.includes('_x')
    ? written.replace(escaped, (_, code: string) => String.fromCharCode(parseInt(code, 16)))
    : written;
