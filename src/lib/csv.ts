/** A cell that a spreadsheet would take for a formula is made text; quotes are doubled. */
function cell(value: string | number | null): string {
  if (value === null) return '';
  if (typeof value === 'number') return String(value);
  const harmless = /^[=+\-@\t\r]/.test(value) ? `'${value}` : value;
  return /[",\n\r]/.test(harmless) ? `"${harmless.replaceAll('"', '""')}"` : harmless;
}

export const toCsv = (rows: readonly (readonly (string | number | null)[])[]): string =>
  rows.map((row) => row.map(cell).join(',')).join('\r\n') + '\r\n';

/** Hands a text to the person as a file. */
export function downloadText(fileName: string, text: string): void {
  const address = URL.createObjectURL(new Blob([text], { type: 'text/csv;charset=utf-8' }));
  const link = document.createElement('a');
  link.href = address;
  link.download = fileName;
  link.click();
  URL.revokeObjectURL(address);
}
