const whole = /^-?(?:0|[1-9]\d*)$/;

/**
 * A number of a sheet as the shortest decimal text that says the same, without an exponent; what is no number
 * stays as it is.
 */
export function numberText(written: string): string {
  if (whole.test(written)) return written === '-0' ? '0' : written;
  const number = Number(written);
  if (!Number.isFinite(number) || written.trim() === '') return written;
  return plainDecimal(String(number === 0 ? 0 : number));
}

/** JavaScript writes an exponent below a millionth and from 10^21 on. */
function plainDecimal(text: string): string {
  const found = /^(-?)(\d)(?:\.(\d+))?e([+-]\d+)$/.exec(text);
  if (!found) return text;
  const [, sign = '', first = '', rest = '', exponent] = found;
  const power = Number(exponent);
  const digits = first + rest;
  return power < 0
    ? `${sign}0.${'0'.repeat(-power - 1)}${digits}`
    : `${sign}${digits.padEnd(power + 1, '0')}`;
}
