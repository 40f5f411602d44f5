import { columnNamed, dateOrderOf, dayIn, decimalMarkOf, numberIn, plainWords, readPastedTable, type DateOrder, type DecimalMark } from './pastedTable.ts';

/**
 * Weather by day from a station's table. Columns are known by their names in five languages; degrees Fahrenheit and
 * inches by their marks in the head. All lines are right, or nothing is taken.
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
  readonly units?: 'metric' | 'us' | null;
}

export interface ReadWeather {
  readonly days: readonly WeatherDay[];
  readonly questions: readonly WeatherQuestion[];
  readonly problems: readonly WeatherProblem[];
  /** What each column was taken for. */
  readonly columns: readonly { readonly name: string; readonly as: ColumnUse | 'leftOut' }[];
  readonly units: 'metric' | 'us';
}

type ColumnUse = 'day' | 'maxC' | 'minC' | 'rainMm';

const words: Record<ColumnUse, readonly string[]> = {
  day: ['day', 'date', 'fecha', 'dia', 'jour', 'data', 'giorno', 'datum'],
  maxC: ['max', 'tmax', 'maximum', 'high', 'maxima', 'maximo', 'maximale', 'massima', 'tx'],
  minC: ['min', 'tmin', 'minimum', 'low', 'minima', 'minimo', 'minimale', 'tn'],
  rainMm: ['rain', 'rainfall', 'precipitation', 'prec', 'precip', 'lluvia', 'precipitacion', 'pluie', 'precipitations', 'pioggia', 'precipitazioni', 'chuva', 'precipitacao', 'rr'],
};
const mostDays = 4000;
const hottestC = 60;
const wettestMm = 2000;
const mmPerInch = 25.4;

export function readWeather(text: string, answers: WeatherAnswers = {}): ReadWeather {
  const table = readPastedTable(text);
  const at = Object.fromEntries((Object.keys(words) as ColumnUse[]).map((use) => [use, columnNamed(table.names, words[use])])) as Record<ColumnUse, number>;
  const columns = table.names.map((name, index) => ({ name, as: (Object.keys(at) as ColumnUse[]).find((use) => at[use] === index) ?? ('leftOut' as const) }));
  const whole = (code: WeatherProblemCode): ReadWeather => ({ days: [], questions: [], problems: [{ code, line: null, cell: '' }], columns, units: 'metric' });
  if (table.rows.length === 0) return whole('empty');
  if (table.rows.length > mostDays) return whole('tooMany');
  if (at.day < 0) return whole('noDayColumn');
  if (at.maxC < 0 && at.minC < 0 && at.rainMm < 0) return whole('noValueColumn');
  if (at.maxC < 0 !== at.minC < 0) return whole('oneTemperature');

  const cellsOf = (use: ColumnUse) => (at[use] < 0 ? [] : table.rows.flatMap(({ cells }) => (cells[at[use]] ? [cells[at[use]]!] : [])));
  const values = [...cellsOf('maxC'), ...cellsOf('minC'), ...cellsOf('rainMm')];
  const order = answers.dateOrder ?? dateOrderOf(cellsOf('day'));
  const mark = answers.decimalMark ?? decimalMarkOf(values);
  const units = answers.units ?? unitsOf(table.names, at, mark === null ? [] : cellsOf('maxC').map((cell) => numberIn(cell, mark)));
  const questions: WeatherQuestion[] = [...(order === null ? ['dateOrder' as const] : []), ...(mark === null ? ['decimalMark' as const] : []), ...(units === null ? ['units' as const] : [])];
  const read = table.rows.map(({ line, cells }) => readLine({ line, cells, at, order: order ?? 'dmy', mark: mark ?? '.', units: units ?? 'metric' }));
  const problems = read.flatMap((each) => ('code' in each ? [each] : []));
  const days = read.flatMap((each) => ('code' in each ? [] : [each]));
  return {
    days: days.map(({ day, maxC, minC, rainMm }) => ({ day, maxC, minC, rainMm })), questions,
    // What is wrong depends on the answers.
    problems: questions.length > 0 ? [] : [...problems, ...twice(days)], columns, units: units ?? 'metric',
  };
}

/** Null when the figures are too warm for °C and the head names no unit. */
function unitsOf(names: readonly string[], at: Record<ColumnUse, number>, maxima: readonly number[]): 'metric' | 'us' | null {
  const head = names.filter((_, index) => index === at.maxC || index === at.minC || index === at.rainMm).map(plainWords).join(' ');
  if (/(^| |°)f( |$)|fahrenheit|(^| )(inch|inches|in)( |$)/.test(head)) return 'us';
  if (/(^| |°)c( |$)|celsius|(^| )mm( |$)/.test(head)) return 'metric';
  return maxima.some((value) => value > hottestC) ? null : 'metric';
}

interface Line {
  line: number;
  cells: readonly string[];
  at: Record<ColumnUse, number>;
  order: DateOrder;
  mark: DecimalMark;
  units: 'metric' | 'us';
}

function readLine({ line, cells, at, order, mark, units }: Line): (WeatherDay & { line: number }) | WeatherProblem {
  const cellOf = (use: ColumnUse) => (at[use] < 0 ? '' : (cells[at[use]] ?? ''));
  const day = dayIn(cellOf('day'), order);
  const problem = (code: WeatherProblemCode, cell: string): WeatherProblem => ({ code, line, cell });
  if (day === null) return problem('noDay', cellOf('day'));
  const wrong = (['maxC', 'minC', 'rainMm'] as const).find((use) => cellOf(use) !== '' && Number.isNaN(numberIn(cellOf(use), mark)));
  if (wrong) return problem('noNumber', cellOf(wrong));
  const value = (use: ColumnUse) => (cellOf(use) === '' ? null : numberIn(cellOf(use), mark));
  const degrees = (shown: number | null) => (shown === null || units === 'metric' ? shown : round((shown - 32) / 1.8));
  const [maxC, minC] = [degrees(value('maxC')), degrees(value('minC'))];
  const rain = value('rainMm');
  const rainMm = rain === null || units === 'metric' ? rain : round(rain * mmPerInch);
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
