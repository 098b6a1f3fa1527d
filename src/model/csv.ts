/** Rows as CSV (RFC 4180). */
export function csvText(rows: readonly (readonly string[])[]): string {
  return rows.map((cells) => `${cells.map(field).join(',')}\r\n`).join('');
}

/** Quoted where RFC 4180 asks for it; a leading sign that a spreadsheet would run as a formula gets a quote mark before it. */
function field(value: string): string {
  const safe = /^[=+@\t\r-]/.test(value) && !NUMBER.test(value) ? `'${value}` : value;
  return /[",\r\n]/.test(safe) ? `"${safe.replaceAll('"', '""')}"` : safe;
}

const NUMBER = /^[+-]?\d+(\.\d*)?([eE][+-]?\d+)?$/;
