import { cellText, isBlank, labelIn, looksNumeric } from './cells.ts';
import type { RawCell, RawLabFile, RawSheet } from './labFile.ts';
import type { Asking } from './questions.ts';
import { joinParts, startsOfLaterTables } from './severalTables.ts';
import { roleOfTitle } from './titles.ts';

/** A table found in a sheet: which column holds the label, what the columns are called, and the rows below. */
export interface LabTable {
  readonly codeColumn: number;
  readonly titles: readonly string[];
  readonly rows: readonly { readonly line: number; readonly cells: readonly RawCell[] }[];
}

type Numbered = { line: number; cells: readonly RawCell[] };

/** The sheet with labels; asked where several have them. */
export function chooseSheet(file: RawLabFile, asking: Asking): RawSheet | null {
  const filled = file.sheets.filter(({ rows }) => rows.some((row) => row.some((cell) => !isBlank(cell))));
  const withLabels = filled.filter((sheet) => countLabels(sheet) > 0);
  const candidates = withLabels.length > 0 ? withLabels : filled;
  if (candidates.length <= 1) {
    if (filled.length > 1 && candidates[0]) asking.say('otherSheets', { name: candidates[0].name, count: filled.length - 1 });
    return candidates[0] ?? null;
  }
  const answer = asking.ask('sheet', { code: 'sheet', choices: candidates.map(({ name }) => ({ value: name, label: name })) });
  return candidates.find(({ name }) => name === answer) ?? null;
}

function countLabels({ rows }: RawSheet): number {
  return rows.reduce((sum, row) => sum + row.filter((cell) => labelIn(cell) !== null).length, 0);
}

/** Finds the table; null while the column of the label is not known. */
export function findTable(sheet: RawSheet, asking: Asking): LabTable | null {
  return tableOf(upright(sheet, asking), asking, true);
}

/** Finds a table whose lines are known by something else than a label: `codeColumn` is -1. Null where no line has two figures. */
export function findUnlabelledTable(sheet: RawSheet, asking: Asking): LabTable | null {
  return tableOf(sheet.rows.map((row) => [...row]), asking, false);
}

function tableOf(grid: readonly RawCell[][], asking: Asking, labelled: boolean): LabTable | null {
  const lines: Numbered[] = grid.map((cells, at) => ({ line: at + 1, cells })).filter(({ cells }) => cells.some((cell) => !isBlank(cell)));
  const width = Math.max(0, ...lines.map(({ cells }) => cells.length));
  const labelColumn = (part: readonly Numbered[]): { column: number; most: number } => {
    const counts = Array.from({ length: width }, (_, column) => (labelled ? part.filter(({ cells }) => labelIn(cells[column]) !== null).length : 0));
    const most = Math.max(0, ...counts);
    return { column: counts.indexOf(most), most };
  };
  const { column, most } = labelColumn(lines);
  const first = most > 0 ? lines.findIndex(({ cells }) => cells.some((cell) => labelIn(cell) !== null)) : lines.findIndex(({ cells }) => cells.filter(looksNumeric).length >= 2);
  if (first < 0) return null;
  const head = headerLines(lines, first);
  const titles = titlesOf(head, width);
  const codeColumn = !labelled ? -1 : most > 0 ? column : askCodeColumn(titles, lines.slice(first), asking);
  if (codeColumn === null) return null;
  const before = lines.slice(0, first).length - head.length;
  if (before > 0) asking.say('linesBefore', { count: before });
  if (head.length === 0) asking.say('noHeader');
  const starts = most > 0 ? startsOfLaterTables(lines, first, namesMeasures) : [];
  if (starts.length === 0) return { codeColumn, titles, rows: lines.slice(first) };
  const parts = [first, ...starts].map((start, at) => {
    const partHead = at === 0 ? head : headerLines(lines, start);
    const end = starts[at] === undefined ? lines.length : starts[at] - headerLines(lines, starts[at]).length;
    const rows = lines.slice(start, end);
    return { titles: titlesOf(partHead, width), codeColumn: labelColumn(rows).column, rows };
  });
  return joinParts(parts, asking);
}

/** Rows are samples; a sheet with samples side by side is turned. */
function upright(sheet: RawSheet, asking: Asking): RawCell[][] {
  const { rows } = sheet;
  const width = Math.max(0, ...rows.map((row) => row.length));
  const perRow = Math.max(0, ...rows.map((row) => row.filter((cell) => labelIn(cell) !== null).length));
  const perColumn = Math.max(0, ...Array.from({ length: width }, (_, column) => rows.filter((row) => labelIn(row[column]) !== null).length));
  if (perRow < 2 || perRow <= perColumn) return rows.map((row) => [...row]);
  asking.say('turned', { count: perRow });
  return Array.from({ length: width }, (_, column) => rows.map((row) => row[column] ?? null));
}

/** The lines above the first result that name columns: words in at least half as many cells as the table is wide, three at most. */
function headerLines(lines: readonly Numbered[], first: number): Numbered[] {
  const width = lines[first]!.cells.filter((cell) => !isBlank(cell)).length;
  const head: Numbered[] = [];
  for (let at = first - 1; at >= 0 && head.length < 3; at--) {
    const filled = lines[at]!.cells.filter((cell) => !isBlank(cell));
    const isUnits = at === first - 1 && at > 0 && filled.every((cell) => typeof cell === 'string' && !looksNumeric(cell)) && namesMeasures(lines[at - 1]!);
    if (!isUnits && (filled.length < Math.max(2, width / 2) || filled.some((cell) => typeof cell === 'number'))) break;
    head.unshift(lines[at]!);
    if (!isUnits && namesMeasures(lines[at]!)) break;
  }
  return head;
}

function namesMeasures({ cells }: Numbered): boolean {
  const everything = ['brix', 'ph', 'ta', 'yan', 'malic', 'berryWeight'].map((code) => ({ code, name: '', unit: '', decimals: 0, minimum: 0, maximum: 0 }));
  const roles = cells.map((cell) => roleOfTitle(cellText(cell), everything).kind);
  return roles.includes('code') || roles.filter((kind) => kind === 'measure').length >= 2;
}

function titlesOf(head: readonly Numbered[], width: number): string[] {
  return Array.from({ length: width }, (_, column) => head.map(({ cells }) => cellText(cells[column])).filter((text) => text !== '').join(' ').slice(0, 80) || `#${column + 1}`);
}

function askCodeColumn(titles: readonly string[], rows: readonly Numbered[], asking: Asking): number | null {
  const choices = titles.map((title, column) => ({ value: String(column), label: examples(title, rows, column) }));
  const suggested = titles.findIndex((title) => roleOfTitle(title, []).kind === 'code');
  const answer = asking.ask('codeColumn', { code: 'codeColumn', choices, suggestion: suggested < 0 ? null : String(suggested) });
  return answer === null ? null : Number(answer);
}

/** A title with what stands below it. */
export function examples(title: string, rows: readonly Numbered[], column: number): string {
  const seen = rows.map(({ cells }) => cellText(cells[column])).filter((text) => text !== '').slice(0, 3).join(', ');
  return seen === '' ? title : `${title}: ${seen}`;
}
