import { findPositionColumns } from '../importing/positionColumns.ts';
import { plainText } from '../lab/file/cells.ts';
import { examples, type LabTable } from '../lab/file/layout.ts';
import type { Asking } from '../lab/file/questions.ts';

/** Which columns tell the place; null where the table has none. */
export interface PlaceColumns {
  readonly block: number | null;
  readonly row: number | null;
  readonly vine: number | null;
  readonly x: number | null;
  readonly y: number | null;
  readonly isProjected: boolean;
}

const before = '(?:(?:no|n|nr|num|numero|number)[.°º]? ?(?:(?:of|de|di|do|da|du|del|della) )?)?';
const behind = '(?: ?(?:no|n|nr|num|number|numero|name|nom|nombre|nome|label|id|code|#))?[.°º]?';
const titled = (words: string) => new RegExp(`^${before}(?:${words})${behind}$`);
const blockTitle = titled('blocks?|blocs?|bloque|blocco|bloco|parcels?|parcelle|parcela|particella|appezzamento|vigneto|vineyard|vinedo|cuartel|talhao|parzelle|field|paddock|lote');
const rowTitle = titled('rows?|rangs?|rangee|ligne|filas?|hilera|linea|filare|linha|fileira|bardo|carreira|reihe|zeile');
const vineTitle = titled('vines?|ceps?|souche|pied|plants?|plante|cepas?|planta|vid|vite|ceppo|pianta|videira|pe|rebe|stock');

/** Whether columns with these titles tell vines by row and number, as a list of readings does, and not by position. */
export function namesRowsAndVines(titles: readonly string[]): boolean {
  const plain = titles.map(plainText);
  return plain.some((title) => rowTitle.test(title)) && plain.some((title) => vineTitle.test(title));
}

/** The columns of the place by their titles, asked where the titles do not tell. Null while that is open. */
export function placeColumns(table: LabTable, asking: Asking): PlaceColumns | null {
  const plain = table.titles.map(plainText);
  const find = (title: RegExp) => at(plain.findIndex((text) => title.test(text)));
  const position = findPositionColumns(table.titles.map((title) => title.replace(/_/g, ' ')), undefined);
  const block = find(blockTitle);
  const [row, vine] = [find(rowTitle), find(vineTitle)];
  if (position !== null) return { block, row, vine, x: position.x, y: position.y, isProjected: position.frame === 'projected' };
  if (row !== null && vine !== null) return { block, row, vine, x: null, y: null, isProjected: false };
  const how = asking.ask('placeBy', { code: 'placeBy', choices: ['rows', 'coordinates'], suggestion: row !== null || vine !== null ? 'rows' : null });
  if (how === null) return null;
  const choices = table.titles.map((title, column) => ({ value: String(column), label: examples(title, table.rows, column) }));
  const chosen = (key: string, found: number | null) => {
    if (found !== null) return found;
    const answer = asking.ask(key, { code: key, choices });
    return answer === null ? null : Number(answer);
  };
  const first = how === 'rows' ? chosen('rowColumn', row) : chosen('xColumn', null);
  const second = how === 'rows' ? chosen('vineColumn', vine) : chosen('yColumn', null);
  if (first === null || second === null) return null;
  return how === 'rows' ? { block, row: first, vine: second, x: null, y: null, isProjected: false } : { block, row: null, vine: null, x: first, y: second, isProjected: false };
}

/** The table without the columns of the place, whose figures measure nothing. */
export function withoutPlace(table: LabTable, columns: PlaceColumns): LabTable {
  const place = new Set([columns.block, columns.row, columns.vine, columns.x, columns.y].filter((column) => column !== null));
  return {
    ...table,
    titles: table.titles.map((title, column) => (place.has(column) ? '' : title)),
    rows: table.rows.map(({ line, cells }) => ({ line, cells: cells.map((cell, column) => (place.has(column) ? null : cell)) })),
  };
}

const at = (index: number) => (index < 0 ? null : index);
