import { dateOrderOf, dayIn, decimalMarkOf, numberIn, plainWords, readPastedTable, type DateOrder, type DecimalMark, type PastedTable } from './pastedTable.ts';
import { fromHead, unitsFound, weatherColumns, type ColumnsAt, type ColumnUse, type UnitsFound, type WeatherUnits } from './weatherColumns.ts';

/**
 * Weather by day from a station's table. Columns are known by their names in five languages; degrees Fahrenheit and
 * inches by the mark of each column. Lines without a figure are days that nobody knows; all others are right, or
 * nothing is taken.
 */
export interface WeatherDay {
  readonly day: string;
  readonly maxC: number | null;
  readonly minC: number | null;
  readonly rainMm: number | null;
}

export type WeatherQuestion = 'dateOrder' | 'decimalMark' | 'units';
export type WeatherProblemCode = 'noDayColumn' | 'noValueColumn' | 'oneTemperature' | 'noDay' | 'dayTwice' | 'noNumber' | 'swapped' | 'tooHot' | 'tooWet' | 'halfTemperature' | 'empty' | 'tooMany';

export interface WeatherProblem {
  readonly code: WeatherProblemCode;
  /** Line of the table, or null when the whole is meant. */
  readonly line: number | null;
  readonly cell: string;
}

export interface WeatherAnswers {
  readonly dateOrder?: DateOrder | null;
  readonly decimalMark?: DecimalMark | null;
  /** For columns whose head names no unit. */
  readonly units?: WeatherUnits | null;
}

export interface ReadWeather {
  readonly days: readonly WeatherDay[];
  readonly questions: readonly WeatherQuestion[];
  readonly problems: readonly WeatherProblem[];
  /** What each column was taken for. */
  readonly columns: readonly { readonly name: string; readonly as: ColumnUse | 'leftOut' }[];
  readonly units: WeatherUnits;
  /** Lines that hold a day and no figure. */
  readonly without: number;
}

const mostDays = 4000;
const hottestC = 60;
const wettestMm = 2000;
/** What stations write where they measured nothing. */
const noFigure = /^(-+|\/+|\*+|n[./]?a\.?|nan|null|none|m|-99+(\.0+)?)$/i;
/** Rain that wets the gauge and cannot be measured. */
const trace = /^(t|tr|trace|traces|traza|tracce|tra[cç]os?)$/i;
const mmPerInch = 25.4;

export function readWeather(text: string, answers: WeatherAnswers = {}): ReadWeather {
  const { table: found, above } = fromHead(text.replace(/^\uFEFF/, ''), readPastedTable);
  const at = weatherColumns(found.names);
  const table = withoutUnitLine(asFigures(found, at), at);
  const columns = table.names.map((name, index) => ({ name, as: (Object.keys(at) as ColumnUse[]).find((use) => at[use] === index) ?? ('leftOut' as const) }));
  const whole = (code: WeatherProblemCode): ReadWeather => ({ days: [], questions: [], problems: [{ code, line: null, cell: '' }], columns, units: 'metric', without: 0 });
  if (table.rows.length === 0) return whole('empty');
  if (table.rows.length > mostDays) return whole('tooMany');
  if (at.day < 0) return whole('noDayColumn');
  if (at.maxC < 0 && at.minC < 0 && at.rainMm < 0) return whole('noValueColumn');
  if (at.maxC < 0 !== at.minC < 0) return whole('oneTemperature');

  const cellsOf = (use: ColumnUse) => (at[use] < 0 ? [] : table.rows.flatMap(({ cells }) => (cells[at[use]] ? [cells[at[use]]!] : [])));
  const values = [...cellsOf('maxC'), ...cellsOf('minC'), ...cellsOf('rainMm')];
  const filled = table.rows.filter(({ cells }) => (['maxC', 'minC', 'rainMm'] as const).some((use) => at[use] >= 0 && cells[at[use]]));
  if (filled.length === 0) return whole('empty');
  const order = answers.dateOrder ?? dateOrderOf(cellsOf('day'));
  const mark = answers.decimalMark ?? decimalMarkOf(values);
  const warmest = (use: ColumnUse) => (mark === null ? 0 : cellsOf(use).reduce((most, cell) => Math.max(most, numberIn(cell, mark) || 0), 0));
  const units = unitsFound(table.names, at, { answer: answers.units ?? null, warmest: warmest('maxC'), warmestNight: warmest('minC') });
  const unsure = units.temperature === null || units.rain === null;
  const questions: WeatherQuestion[] = [...(order === null ? ['dateOrder' as const] : []), ...(mark === null ? ['decimalMark' as const] : []), ...(unsure ? ['units' as const] : [])];
  const read = filled.map(({ line, cells }) => readLine({ line: line + above, cells, at, order: order ?? 'dmy', mark: mark ?? '.', units }));
  const problems = read.flatMap((each) => ('code' in each ? [each] : []));
  const days = read.flatMap((each) => ('code' in each ? [] : [each]));
  return {
    days: days.map(({ day, maxC, minC, rainMm }) => ({ day, maxC, minC, rainMm })), questions,
    // What is wrong depends on the answers.
    problems: questions.length > 0 ? [] : [...problems, ...twice(days)], columns, units: units.temperature ?? 'metric', without: table.rows.length - filled.length,
  };
}

/** Marks of nothing become empty cells, a trace of rain 0. */
function asFigures(table: PastedTable, at: ColumnsAt): PastedTable {
  const figure = (cell: string, index: number) => (index === at.day ? cell : noFigure.test(cell) ? '' : index === at.rainMm && trace.test(cell) ? '0' : cell);
  return { names: table.names, rows: table.rows.map(({ line, cells }) => ({ line, cells: cells.map(figure) })) };
}

/** A second line of the head that names the units belongs to the names above it. */
function withoutUnitLine(table: PastedTable, at: ColumnsAt): PastedTable {
  const [first, ...rows] = table.rows;
  const isUnits = first !== undefined && !/\d/.test(first.cells[at.day] ?? '') && first.cells.some((cell) => /^(°? ?[cf]|mm|in|inch|inches|celsius|fahrenheit)$/i.test(plainWords(cell)));
  return isUnits ? { names: table.names.map((name, index) => `${name} ${first.cells[index] ?? ''}`), rows } : table;
}

interface Line {
  line: number;
  cells: readonly string[];
  at: ColumnsAt;
  order: DateOrder;
  mark: DecimalMark;
  units: UnitsFound;
}

function readLine({ line, cells, at, order, mark, units }: Line): (WeatherDay & { line: number }) | WeatherProblem {
  const cellOf = (use: ColumnUse) => (at[use] < 0 ? '' : (cells[at[use]] ?? ''));
  const day = dayIn(cellOf('day'), order);
  const problem = (code: WeatherProblemCode, cell: string): WeatherProblem => ({ code, line, cell });
  if (day === null) return problem('noDay', cellOf('day'));
  const wrong = (['maxC', 'minC', 'rainMm'] as const).find((use) => cellOf(use) !== '' && Number.isNaN(numberIn(cellOf(use), mark)));
  if (wrong) return problem('noNumber', cellOf(wrong));
  const value = (use: ColumnUse) => (cellOf(use) === '' ? null : numberIn(cellOf(use), mark));
  const degrees = (shown: number | null) => (shown === null || units.temperature !== 'us' ? shown : round((shown - 32) / 1.8));
  const [maxC, minC] = [degrees(value('maxC')), degrees(value('minC'))];
  const rain = value('rainMm');
  const rainMm = rain === null || units.rain !== 'us' ? rain : round(rain * mmPerInch);
  if ((maxC === null) !== (minC === null)) return problem('halfTemperature', cellOf('day'));
  if (maxC === null && rainMm === null) return problem('noNumber', cellOf('day'));
  if (maxC !== null && minC !== null && minC > maxC) return problem('swapped', `${cellOf('minC')} / ${cellOf('maxC')}`);
  if ([maxC, minC].some((degree) => degree !== null && Math.abs(degree) > hottestC)) return problem('tooHot', Math.abs(maxC ?? 0) > hottestC ? cellOf('maxC') : cellOf('minC'));
  if (rainMm !== null && !(rainMm >= 0 && rainMm <= wettestMm)) return problem('tooWet', cellOf('rainMm'));
  return { line, day, maxC, minC, rainMm };
}

function twice(days: readonly (WeatherDay & { line: number })[]): WeatherProblem[] {
  const seen = new Set<string>();
  return days.flatMap(({ day, line }) => {
    if (seen.has(day)) return [{ code: 'dayTwice' as const, line, cell: day }];
    seen.add(day);
    return [];
  });
}

const round = (value: number) => Number(value.toFixed(2));
