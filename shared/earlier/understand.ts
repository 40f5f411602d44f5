import { looseValues } from '../lab/file/columns.ts';
import { cellText, isBlank, plainText } from '../lab/file/cells.ts';
import { readDates } from '../lab/file/dates.ts';
import type { LabAnswers, RawCell, RawLabFile } from '../lab/file/labFile.ts';
import { chooseSheet, findUnlabelledTable, type LabTable } from '../lab/file/layout.ts';
import { Asking } from '../lab/file/questions.ts';
import { readValues, type DoubtfulCell } from '../lab/file/readValues.ts';
import { mendMarks } from '../lab/file/shifts.ts';
import { placeColumns, withoutPlace } from './columns.ts';
import type { EarlierEntry, EarlierSurroundings, RefusedPart, UnderstoodEarlier } from './earlierTable.ts';
import { lineList } from './lineList.ts';
import { isPlace, placesOfLines } from './places.ts';
import { onceEach } from './repeats.ts';

/**
 * What a table of readings of earlier visits says, with the answers given so far: which columns are which measures, the
 * vine and the day of every line, and every line or cell that cannot be used with the reason. A doubtful figure is kept
 * and marked; a line without vine or day is refused, never guessed. Nothing may be stored while a question is open.
 */
export function understandEarlier(file: RawLabFile, around: EarlierSurroundings, answers: LabAnswers): UnderstoodEarlier {
  const asking = new Asking(answers);
  if (file.encoding !== null && file.encoding !== 'UTF-8') asking.say('encoding', { encoding: file.encoding });
  const sheet = chooseSheet(file, asking);
  const table = sheet && findUnlabelledTable(sheet, asking);
  const done = (found: Pick<UnderstoodEarlier, 'entries' | 'refused'>): UnderstoodEarlier => ({ ...found, words: asking.words, questions: asking.questions, lines: table?.rows.length ?? 0, signature: (table?.titles ?? []).map(plainText).join('|') });
  if (!table && asking.questions.length === 0) asking.say('noTable');
  const columns = table && placeColumns(table, asking);
  if (!table || !columns) return done({ entries: [], refused: [] });
  const even = table.rows.filter(({ cells }) => !isTooWide(cells, table, file.kind));
  const refused: RefusedPart[] = table.rows.filter(({ cells }) => isTooWide(cells, table, file.kind)).map(({ line, cells }) => ({ line, code: 'tooWide', params: { cells: lastFilled(cells), titles: table.titles.length } }));
  const loose = looseValues(withoutPlace({ ...table, rows: even }, columns), around.measures, asking);
  const measured = new Set(loose.values.map(({ line }) => line));
  // While no column is known yet, everything else is asked of all lines, so that all questions stand together.
  const lines = measured.size === 0 ? even : even.filter(({ line }) => measured.has(line));
  if (loose.values.length > 0 && even.length > lines.length) asking.say('emptyLines', { count: even.length - lines.length, lines: lineList(even.filter(({ line }) => !measured.has(line)).map(({ line }) => line)) });
  if (loose.values.length === 0 && asking.questions.every(({ answer }) => answer !== null)) asking.say('noMeasures');
  const days = daysOf(lines, loose.dateColumn, around, asking, answers);
  const places = placesOfLines({ ...table, rows: lines }, columns, around, asking);
  const values = mendMarks(loose.values, around.measures, asking);
  if (places === null || values === null || days === null) return done({ entries: [], refused });
  const usable = new Set<number>();
  for (const { line, cells } of lines) {
    const place = places.get(line)!;
    const day = days.get(line);
    if (!isPlace(place)) refused.push(place);
    else if (day === undefined) refused.push({ line, code: 'noDay', params: { text: loose.dateColumn === null ? '' : cellText(cells[loose.dateColumn]).slice(0, 40) } });
    else if (day > around.today) refused.push({ line, code: 'future', params: { day } });
    else usable.add(line);
  }
  const read = readValues(values.filter(({ line }) => usable.has(line)), {
    measures: around.measures, labels: new Map([...usable].map((line) => [line, String(line)])), dates: new Map(), temperatureColumn: loose.temperatureColumn, isFahrenheit: loose.isFahrenheit,
    settle: ({ code, line, title, text, canKeep }: DoubtfulCell) => {
      if (canKeep) return 'keep';
      refused.push({ line, code, params: { title, text: text.slice(0, 40) } });
      return 'leaveOut';
    },
  }, asking);
  const planted = new Map(around.blocks.map(({ id, plantedYear }) => [id, plantedYear]));
  const isEarly = (blockId: string, day: string) => Number(day.slice(0, 4)) < (planted.get(blockId) ?? 0);
  const entries = read.map(({ line, measure, value, below, typed, unitTyped, odd }): EarlierEntry => {
    const place = places.get(line)!;
    if (!isPlace(place)) throw new Error(`Line ${line} was read without a vine`);
    const day = days.get(line)!;
    return { ...place, line, measure, value, below, typed, unitTyped, day, odd: odd || isEarly(place.blockId, day), isRepeat: false };
  });
  sayMarked(read.filter(({ odd }) => odd), 'oddValues', asking);
  sayMarked(entries.filter(({ blockId, day }) => isEarly(blockId, day)), 'beforePlanting', asking);
  return done({ entries: onceEach(entries, asking), refused: refused.sort((a, b) => a.line - b.line) });
}

/** The day of every line: of its own column, or one day for all. Null while it is open. */
function daysOf(lines: LabTable['rows'], column: number | null, around: EarlierSurroundings, asking: Asking, answers: LabAnswers): ReadonlyMap<number, string> | null {
  if (column !== null) {
    const open = asking.questions.length;
    const days = readDates(new Map(lines.map(({ line, cells }) => [line, cells[column] ?? null])), { earliest: null, today: around.today }, asking);
    return asking.questions.slice(open).some(({ answer }) => answer === null) ? null : days;
  }
  const given = answers.day ?? '';
  const day = /^\d{4}-\d\d-\d\d$/.test(given) && !Number.isNaN(Date.parse(given)) && given <= around.today ? given : null;
  asking.questions.push({ key: 'day', code: 'day', params: {}, choices: [], suggestion: null, answer: day });
  return day === null ? null : new Map(lines.map(({ line }) => [line, day]));
}

const lastFilled = (cells: readonly RawCell[]) => cells.reduce<number>((last, cell, index) => (isBlank(cell) ? last : index + 1), 0);

/** More cells than titles in a text file: a mark inside a figure divided it, and everything behind stands in the wrong column. */
function isTooWide(cells: readonly RawCell[], { titles }: LabTable, kind: RawLabFile['kind']): boolean {
  const named = titles.reduce((last, title, index) => (title.startsWith('#') ? last : index + 1), 0);
  return kind === 'text' && named > 0 && lastFilled(cells) > named;
}

function sayMarked(marked: readonly { line: number }[], code: string, asking: Asking): void {
  if (marked.length > 0) asking.say(code, { count: marked.length, lines: lineList(marked.map(({ line }) => line)) });
}
