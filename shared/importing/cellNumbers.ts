/** Numbers as people and instruments write them into cells. */

export type DecimalMark = '.' | ',';

/**
 * The decimal mark of a table: a comma when cells such as 12,5 occur and none such as 12.5 does. `unsure` when every
 * number with a comma could just as well be thousands (1,234).
 */
export function findDecimalMark(cells: Iterable<string>, separator: string): { mark: DecimalMark; unsure: boolean } {
  let commas = 0;
  let dots = 0;
  let thousandsLike = 0;
  for (const cell of cells) {
    if (/^[+-]?\d{1,3}(\.\d{3})+,\d+$/.test(cell)) commas += 100;
    else if (/^[+-]?\d{1,3}(,\d{3})+\.\d+$/.test(cell)) dots += 100;
    else if (/^[+-]?\d+,\d+(\s|$|°|[a-zA-Z%])/.test(cell)) {
      commas++;
      if (/^[+-]?[1-9]\d{0,2},\d{3}$/.test(cell)) thousandsLike++;
    } else if (/^[+-]?\d*\.\d+/.test(cell)) dots++;
  }
  if (separator === ',' && commas < 100) return { mark: '.', unsure: false };
  if (commas > dots) return { mark: ',', unsure: commas < 100 && thousandsLike === commas };
  return { mark: '.', unsure: false };
}

export interface CellNumber {
  /** NaN when the cell is not a number. */
  value: number;
  /** Letters behind the number, as in "12.3 mS/m". */
  unit: string;
}

/**
 * The decimal mark of one column. In a table that mixes marks, a column with cells such as 12.53 and none such as 12,53 has
 * points, whatever the rest of the table has, and the other way; a column that does not tell follows the table.
 */
export function columnMark(cells: Iterable<string>, table: DecimalMark): DecimalMark {
  let [points, commas] = [0, 0];
  for (const cell of cells) {
    // One point is as good as many; only a comma can still change the answer. Whole numbers tell nothing.
    if (!cell.includes(',') && (points > 0 || !cell.includes('.'))) continue;
    if (/^[+-]?\d*\.(\d{1,2}|\d{4,})(\D|$)/.test(cell) || /^[+-]?0?\.\d+/.test(cell)) points++;
    else if (/^[+-]?\d*,(\d{1,2}|\d{4,})(\D|$)/.test(cell) || /^[+-]?0?,\d+/.test(cell)) commas++;
  }
  if (points > 0 && commas === 0) return '.';
  return commas > 0 && points === 0 ? ',' : table;
}

/** What instruments and spreadsheets write where nothing was measured. */
const missingWords = /^(nan|n\/?a|#n\/?a|#n\/v|null|nil|none|no ?data|inf|-inf|infinity|-infinity|-+|\.+|\?+)$/i;

export function isMissingWord(cell: string): boolean {
  return missingWords.test(cell);
}

/** The number of a cell that is nothing but digits and a decimal point, as nearly every cell of a long table is; else null. */
export function plainNumber(text: string, mark: DecimalMark): number | null {
  let points = 0;
  const from = text.charCodeAt(0) === minus ? 1 : 0;
  for (let at = from; at < text.length; at++) {
    const code = text.charCodeAt(at);
    if (code >= zero && code <= nine) continue;
    // A point may stand for thousands where the comma is the decimal mark.
    if (code !== point || mark === ',' || ++points > 1 || at === from || at === text.length - 1) return null;
  }
  return text.length === from ? null : Number(text);
}

const [minus, point, zero, nine] = [45, 46, 48, 57];

/** The number in a cell; thousands (also by spaces and apostrophes) are taken out, a unit behind it is split off. Empty cells and words are NaN. */
export function cellNumber(text: string, mark: DecimalMark): CellNumber {
  const plainly = plainNumber(text, mark);
  if (plainly !== null) return { value: plainly, unit: '' };
  const cell = text.replace(/(?<=\d)['’\u00a0\u2009\u202f](?=\d{3})/g, '');
  // A comma with other than three digits behind it parts no thousands, whatever the rest of the table does.
  const plain = mark === ',' ? cell.replace(/\.(?=\d{3}(\D|$))/g, '').replace(',', '.') : cell.replace(/,(?=\d{3}(\D|$))/g, '').replace(/^([+-]?\d+),(?=\d+(\D|$))/, '$1.');
  const match = /^([+-]?(?:\d+\.?\d*|\.\d+)(?:[eE][+-]?\d+)?)\s*([^\d\s][^\d]{0,15})?$/u.exec(plain.replace('−', '-'));
  if (match === null) return { value: NaN, unit: '' };
  return { value: Number(match[1]), unit: (match[2] ?? '').trim() };
}
