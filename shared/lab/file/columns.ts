import { groupBy } from '../../groupBy.ts';
import { unitsOf } from '../units.ts';
import { readFigure } from '../figure.ts';
import { cellText, isBlank, looksNumeric, plainText } from './cells.ts';
import type { LabTable } from './layout.ts';
import type { LabMeasure, RawCell } from './labFile.ts';
import { isPlausible } from './plausible.ts';
import type { Asking } from './questions.ts';
import { joinQualifiers } from './qualifiers.ts';
import { mendLines } from './lineShifts.ts';
import { mendTitles } from './shifts.ts';
import { mendSwap } from './swaps.ts';
import { isFahrenheit, roleOfTitle, unitOfWord } from './titles.ts';

/** A measured cell before its number is read. */
export interface LooseValue {
  readonly line: number;
  readonly labelCell: RawCell;
  readonly measure: string;
  readonly unit: string;
  readonly cell: RawCell;
  readonly title: string;
  readonly column: number;
  readonly rowCells: readonly RawCell[];
}

export interface LooseTable {
  readonly values: readonly LooseValue[];
  /** Columns of the whole table; null where there is none. */
  readonly dateColumn: number | null;
  readonly temperatureColumn: number | null;
  /** Degrees Fahrenheit, by the column's title. */
  readonly isFahrenheit: boolean;
}

const mostly = 0.7;

/** Which columns hold what, asked where neither title nor figures tell; a file with one result a line is read by its words. */
export function looseValues(found: LabTable, measures: readonly LabMeasure[], asking: Asking): LooseTable {
  const table = mendLines(mendSwap(mendTitles(joinQualifiers(found, asking), measures, asking), measures, asking), measures, asking);
  const roles = table.titles.map((title) => roleOfTitle(title, measures));
  const at = (kind: string) => roles.findIndex((role, column) => role.kind === kind && column !== table.codeColumn);
  const temperatureColumn = at('temperature') < 0 ? null : at('temperature');
  const parts = {
    dateColumn: dayColumn(
      table.titles.filter((_, column) => roles[column]!.kind === 'date' && column !== table.codeColumn),
      table,
    ),
    temperatureColumn,
    isFahrenheit: temperatureColumn !== null && isFahrenheit(table.titles[temperatureColumn] ?? ''),
  };
  const wordColumn = longColumn(table, measures);
  if (wordColumn !== null) return { ...parts, ...readLong(table, { measures, wordColumn, asking }) };
  const values: LooseValue[] = [];
  for (const [column, title] of table.titles.entries()) {
    if (column === table.codeColumn || column === parts.dateColumn || column === parts.temperatureColumn) continue;
    const cells = table.rows.map(({ cells }) => cells[column] ?? null);
    const measured = columnMeasure({ title, cells, measures }, asking);
    if (measured === null) continue;
    for (const { line, cells: rowCells } of table.rows) {
      if (!isBlank(rowCells[column])) values.push({ line, labelCell: rowCells[table.codeColumn] ?? null, ...measured, cell: rowCells[column]!, title, column, rowCells });
    }
  }
  return { values, ...parts };
}

/** The day of analysis; where a file has several days, not the one on which fruit was picked or came in. */
function dayColumn(titles: readonly string[], { titles: all }: LabTable): number | null {
  const isOther = (title: string) => /recei|recu|recep|recib|ricev|sampl|prelev|collect|pick|toma|muestreo|campionam|recolh|colhe|vendim/.test(plainText(title));
  const title = titles.find((each) => !isOther(each)) ?? titles[0];
  return title === undefined ? null : all.indexOf(title);
}

/** A column of words that name measures, one result a line. */
function longColumn(table: LabTable, measures: readonly LabMeasure[]): number | null {
  for (const column of table.titles.keys()) {
    if (column === table.codeColumn) continue;
    const texts = table.rows.map(({ cells }) => cells[column]).filter((cell) => !isBlank(cell));
    const named = texts.filter((cell) => typeof cell === 'string' && !startsWithFigure(cell) && roleOfTitle(cell, measures).kind === 'measure');
    if (texts.length >= 2 && named.length >= mostly * texts.length) return column;
  }
  return null;
}

/** "23,1 °Brix" is a figure with its unit, though it names a measure. */
const startsWithFigure = (cell: string) => /^[<≤>≥~≈]?\s*[+-]?[.,]?\d/.test(cell.trim());

function readLong(table: LabTable, { measures, wordColumn, asking }: { measures: readonly LabMeasure[]; wordColumn: number; asking: Asking }): { values: LooseValue[] } {
  const roles = table.titles.map((title) => roleOfTitle(title, measures).kind);
  const numeric = (column: number) => table.rows.filter(({ cells }) => looksNumeric(cells[column])).length;
  const others = [...table.titles.keys()].filter((column) => column !== wordColumn && column !== table.codeColumn && roles[column] !== 'date' && roles[column] !== 'temperature');
  const valueColumn = others.find((column) => roles[column] === 'value') ?? [...others].sort((a, b) => numeric(b) - numeric(a))[0];
  if (valueColumn === undefined) return { values: [] };
  const unitColumn = others.find((column) => roles[column] === 'unit') ?? others.find((column) => column !== valueColumn && numeric(column) === 0 && table.rows.some(({ cells }) => /\/l|°|brix|ph\b/i.test(cellText(cells[column]))));
  asking.say('oneALine');
  const unitOf = (cells: readonly RawCell[]): string => (unitColumn === undefined ? '' : cellText(cells[unitColumn]));
  // One measure may stand in two units, such as acidity from two instruments: each line keeps its own.
  const named = groupBy(table.rows.filter(({ cells }) => cellText(cells[wordColumn]) !== ''), ({ cells }) => `${cellText(cells[wordColumn])} ${unitOf(cells)}`.trim());
  const unitsOfWord = groupBy([...named.values()], ([row]) => cellText(row!.cells[wordColumn]));
  const values: LooseValue[] = [];
  for (const [title, rows] of named) {
    const word = cellText(rows[0]!.cells[wordColumn]);
    const shown = unitsOfWord.get(word)!.length > 1 ? title : word;
    const found = columnMeasure({ title, cells: rows.map(({ cells }) => cells[valueColumn] ?? null), measures }, asking);
    if (found === null) continue;
    for (const { line, cells: rowCells } of rows) {
      if (!isBlank(rowCells[valueColumn])) values.push({ line, labelCell: rowCells[table.codeColumn] ?? null, ...found, cell: rowCells[valueColumn]!, title: shown, column: valueColumn, rowCells });
    }
  }
  return { values };
}

interface Column {
  readonly title: string;
  readonly cells: readonly RawCell[];
  readonly measures: readonly LabMeasure[];
}

function columnMeasure(column: Column, asking: Asking): { measure: string; unit: string } | null {
  const { title, cells, measures } = column;
  const role = roleOfTitle(title, measures);
  const filled = cells.filter((cell) => !isBlank(cell));
  if (role.kind === 'measure') return withUnit(column, role, asking);
  if (role.kind === 'foreign' && filled.length > 0) asking.say('foreignUnit', { title });
  if (role.kind === 'foreign') return null;
  const numbers = filled.filter(looksNumeric).length;
  if (role.kind !== 'unknown' || filled.length === 0 || numbers < filled.length / 2) {
    if (filled.length > 0 && !title.startsWith('#')) asking.say('leftOutColumn', { title });
    return null;
  }
  const example = filled.slice(0, 3).map(cellText).join('; ');
  const answer = asking.ask(`column:${title}`, { code: 'column', params: { title, example }, choices: [...measures.map(({ code, name }) => ({ value: code, label: name || null })), { value: 'none', label: null }] });
  if (answer === null || answer === 'none') return null;
  return withUnit(column, { measure: answer, unit: null }, asking);
}

/** The unit by title, by what the figures can only be, or by answer. Null while it is open. */
function withUnit({ title, cells, measures }: Column, role: { measure: string; unit: string | null }, asking: Asking): { measure: string; unit: string } | null {
  const measure = measures.find(({ code }) => code === role.measure)!;
  const units = unitsOf(measure.code);
  if (units.length === 0) return { measure: measure.code, unit: measure.unit };
  const figures = cells.map((cell) => roughly(cell)).filter((value) => !Number.isNaN(value));
  const fits = (unit: string) => figures.length === 0 || figures.filter((value) => isPlausible(measure, unit, value)).length >= mostly * figures.length;
  const told = role.unit ?? unitOfWord(title, measure.code);
  // "1,820" mg/L may be thousands: a unit that the title names is doubted only when neither reading fits.
  const fitsToldUnit = (unit: string) => fits(unit) || eitherFits(cells, measure, unit);
  if (told !== null && (fitsToldUnit(told) || !units.some(({ id }) => fits(id)))) return { measure: measure.code, unit: told };
  // Degrees of Klosterneuburg look like degrees Brix, and only German titles mean them without saying so.
  const possible = units.filter(({ id }) => fits(id) && (id !== 'kmw' || told === 'kmw' || /zucker|most/i.test(title)));
  // Figures near 1.09 can be nothing but a gravity. Always asked: acidity, whose scales overlap, and grams a litre, which
  // may be all that is dissolved or the sugar alone.
  if (told === null && possible.length === 1 && measure.code !== 'ta' && !possible[0]!.id.endsWith('GPerL')) {
    asking.say('unitByFigures', { title, unit: possible[0]!.shown });
    return { measure: measure.code, unit: possible[0]!.id };
  }
  const choices = (possible.length > 0 ? possible : units).map(({ id }) => id);
  const example = cells.filter((cell) => !isBlank(cell)).slice(0, 3).map(cellText).join('; ');
  const answer = asking.ask(`unit:${title}`, { code: told === null ? 'unit' : 'unitDoubt', params: { title, example }, choices: [...choices, 'none'], suggestion: null });
  return answer === null || answer === 'none' ? null : { measure: measure.code, unit: answer };
}

/** A cell's number whatever its decimal mark is, to see which units it could be in. */
function roughly(cell: RawCell): number {
  if (typeof cell === 'number') return cell;
  const figure = readFigure(cellText(cell), null);
  if (figure.kind === 'number') return figure.value;
  return figure.kind === 'ambiguous' ? figure.asDecimal : Number.NaN;
}

/** Most cells fit the unit, read with decimals or with thousands. */
function eitherFits(cells: readonly RawCell[], measure: LabMeasure, unit: string): boolean {
  const filled = cells.filter((cell) => !isBlank(cell));
  const fitting = filled.filter((cell) => {
    const figure = readFigure(cellText(cell), null);
    return figure.kind === 'ambiguous' ? isPlausible(measure, unit, figure.asDecimal) || isPlausible(measure, unit, figure.asThousands) : isPlausible(measure, unit, roughly(cell));
  });
  return fitting.length >= mostly * filled.length;
}
