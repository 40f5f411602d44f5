import { vineOrdinal } from '../geo/numbering.ts';
import { vineIndex } from '../geo/vines.ts';
import { cellText, isBlank, plainText } from '../lab/file/cells.ts';
import type { RawCell } from '../lab/file/labFile.ts';
import type { LabTable } from '../lab/file/layout.ts';
import type { Asking } from '../lab/file/questions.ts';
import type { PlaceColumns } from './columns.ts';
import type { EarlierBlock, EarlierPlace, RefusedPart } from './earlierTable.ts';
import { placeOf } from './nearestVine.ts';

const askedNames = 12;

/** The block of each line: by its column, asked where a name is not one of the estate's, else one answer for the whole table. */
export function blocksOfLines(table: LabTable, { block: column }: PlaceColumns, { blocks, asking }: { blocks: readonly EarlierBlock[]; asking: Asking }): ReadonlyMap<number, EarlierBlock | 'unknown'> | null {
  const choices = blocks.map(({ id, name }) => ({ value: id, label: name }));
  const byId = new Map(blocks.map((block) => [block.id, block]));
  if (column === null) {
    const answer = blocks.length === 1 ? blocks[0]!.id : asking.ask('block', { code: 'block', choices });
    return answer === null ? null : new Map(table.rows.map(({ line }) => [line, byId.get(answer)!]));
  }
  const names = [...new Set(table.rows.map(({ cells }) => cellText(cells[column])).filter((name) => name !== ''))];
  const found = new Map<string, EarlierBlock | 'unknown'>();
  const strange: string[] = [];
  for (const name of names) {
    const own = blocks.filter((block) => bareName(block.name) === bareName(name));
    if (own.length === 1) found.set(name, own[0]!);
    else strange.push(name);
  }
  let isOpen = false;
  for (const name of strange) {
    const answer = strange.length > askedNames ? 'leaveOut' : asking.ask(`blockName:${name.slice(0, 80)}`, { code: 'blockName', params: { name: name.slice(0, 80) }, choices: [...choices, 'leaveOut'], suggestion: null });
    if (answer === null) isOpen = true;
    found.set(name, answer === null || answer === 'leaveOut' ? 'unknown' : byId.get(answer)!);
  }
  return isOpen ? null : new Map(table.rows.map(({ line, cells }) => [line, found.get(cellText(cells[column])) ?? 'unknown']));
}

/** "Block 7", "block_7" and "7" name one block. */
const bareName = (name: string) => plainText(name).replace(/^(block|bloc|bloque|blocco|bloco|parcel|parcelle|parcela|particella|talhao|cuartel) /, '');

/** The vine that row and number name, as people of the block count them, or why there is none. */
export function numberedVine(block: EarlierBlock, cells: readonly RawCell[], at: { line: number; row: number; vine: number; numbering: string }): EarlierPlace | RefusedPart {
  const { line, numbering } = at;
  if (isBlank(cells[at.row]) || isBlank(cells[at.vine])) return { line, code: 'noPlace', params: {} };
  const wanted = cellText(cells[at.row]);
  const labels = block.named.map(({ label, labelWas }) => (numbering === 'before' ? (labelWas ?? label) : label));
  const exact = labels.indexOf(wanted);
  const row = exact >= 0 ? exact : labels.findIndex((label) => bareNumber(label) === bareNumber(wanted));
  if (row < 0) return { line, code: 'noRow', params: { row: wanted.slice(0, 20), block: block.name } };
  const number = Number(bareNumber(cellText(cells[at.vine])));
  const ordinal = vineOrdinal(block.rows[row]!, number, block.vineOneEnd);
  const vine = ordinal === null ? -1 : vineIndex(block.vines, row, ordinal);
  if (vine < 0) return { line, code: 'noVine', params: { row: labels[row]!, block: block.name, vine: cellText(cells[at.vine]).slice(0, 20), most: block.rows[row]!.vineCount } };
  return placeOf(block, vine, null);
}

/** "Row 012", "R12" and "12.0" are 12; a letter behind stays: "12a". */
function bareNumber(text: string): string {
  const plain = plainText(text).replace(/^[a-z]+[ .:-]*(?=\d)/, '').replace(/\.0+$/, '');
  return plain.replace(/^0+(?=\d)/, '');
}
