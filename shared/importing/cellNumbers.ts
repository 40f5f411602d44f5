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

/** The number in a cell; thousands are taken out, a unit behind it is split off. Empty cells and words are NaN. */
export function cellNumber(cell: string, mark: DecimalMark): CellNumber {
  const plain = mark === ',' ? cell.replace(/\.(?=\d{3}(\D|$))/g, '').replace(',', '.') : cell.replace(/,(?=\d{3}(\D|$))/g, '');
  const match = /^([+-]?(?:\d+\.?\d*|\.\d+)(?:[eE][+-]?\d+)?)\s*([^\d\s][^\d]{0,15})?$/u.exec(plain.replace('−', '-'));
  if (match === null) return { value: NaN, unit: '' };
  return { value: Number(match[1]), unit: (match[2] ?? '').trim() };
}
