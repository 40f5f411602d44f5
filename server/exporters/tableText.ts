import Papa from 'papaparse';

/** A cell of a table; of a figure with decimals it is said how many. */
export type TableCell = string | number | null | { readonly value: number; readonly decimals: number };

/** Begins like a formula, and is no figure: a minus before a longitude is a sign. */
const runsAsFormula = /^(?![+-]?\d+(?:[.,]\d+)?$)[=+\-@\t\r]/;

/** Where a cell would begin in a spreadsheet that is set to another list separator (OWASP, CSV Injection). */
const runsElsewhere = /([;,\t])(?=[=+\-@])/g;

/**
 * A table that opens in a spreadsheet set to the reader's language: comma and decimal point in English, semicolon and
 * decimal comma in the other four (common practice: the list separator that these countries' systems are set to).
 * RFC 4180 quoting, with a byte-order mark; text that a spreadsheet would run is disarmed.
 */
export function tableText(fields: readonly string[], lines: readonly Readonly<Record<string, TableCell>>[], language: string): string {
  const hasPoint = language === 'en';
  const written = (cell: TableCell | undefined): string => {
    if (cell === null || cell === undefined) return '';
    if (typeof cell === 'string') return cell.replace(runsElsewhere, "$1'");
    const text = typeof cell === 'number' ? String(cell) : cell.value.toFixed(cell.decimals);
    return hasPoint ? text : text.replace('.', ',');
  };
  const data = lines.map((line) => fields.map((field) => written(line[field])));
  return `\uFEFF${Papa.unparse({ fields: [...fields], data }, { delimiter: hasPoint ? ',' : ';', escapeFormulae: runsAsFormula, newline: '\r\n' })}\r\n`;
}
