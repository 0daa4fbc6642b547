/** A text cell that a spreadsheet would take for a formula is led by an apostrophe (OWASP ASVS 5.0, 1.2.10). */
const FORMULA_START = /^[=+\-@\t\r\n\0＝＋－＠]/;

/** One line of RFC 4180. Numbers are written as they are; text cells are made harmless for spreadsheets. */
export function csvLine(cells: readonly (string | number | null)[]): string {
  return `${cells.map(csvCell).join(",")}\r\n`;
}

function csvCell(value: string | number | null): string {
  if (value === null) return "";
  if (typeof value === "number") return String(value);
  const safe = FORMULA_START.test(value) ? `'${value}` : value;
  return /[",\r\n]/.test(safe) ? `"${safe.replaceAll('"', '""')}"` : safe;
}
