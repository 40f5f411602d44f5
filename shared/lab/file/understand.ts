import { groupBy } from '../../groupBy.ts';
import { looseValues } from './columns.ts';
import { plainText } from './cells.ts';
import { readDates, settleDays } from './dates.ts';
import { settleHidden } from './hiddenCells.ts';
import type { LabAnswers, LabEntry, LabSurroundings, RawLabFile, UnderstoodLabFile } from './labFile.ts';
import { matchLabels, withoutMeans } from './labels.ts';
import { chooseSheet, findTable } from './layout.ts';
import { mendRows } from './mendRows.ts';
import { Asking } from './questions.ts';
import { readValues } from './readValues.ts';
import { settleColumns } from './sameMeasure.ts';
import { mendMarks } from './shifts.ts';

/**
 * What a laboratory's file says, with the answers given so far: sentences on how it was read, questions where it can be
 * read in two ways, and the results that would be stored. While a question is open nothing may be stored.
 */
export function understandLabFile(file: RawLabFile, around: LabSurroundings, answers: LabAnswers): UnderstoodLabFile {
  const asking = new Asking(answers);
  if (file.encoding !== null && file.encoding !== 'UTF-8') asking.say('encoding', { encoding: file.encoding });
  const entries = readFile(file, around, asking);
  const settled = settleRepeats(entries.list, around, asking);
  return { words: asking.words, questions: asking.questions, entries: settled, signature: entries.titles.map(plainText).join('|') };
}

const nothing = { list: [] as LabEntry[], titles: [] as readonly string[] };

function readFile(file: RawLabFile, around: LabSurroundings, asking: Asking): { list: LabEntry[]; titles: readonly string[] } {
  const sheet = chooseSheet(file, asking);
  const mended = sheet && mendRows(file, settleHidden(sheet, asking), asking);
  const found = mended && findTable(mended, asking);
  const table = found && { ...found, rows: withoutMeans(found.rows, found.codeColumn, asking) };
  if (!table) {
    if (asking.questions.length === 0) asking.say('noResults');
    return nothing;
  }
  const loose = looseValues(table, around.measures, asking);
  const filled = new Set(loose.values.map(({ line }) => line));
  const labels = matchLabels(table.rows.filter(({ line }) => filled.has(line)).map(({ line, cells }) => ({ line, cell: cells[table.codeColumn] ?? null })), around.labels, asking);
  const sampled = loose.values.filter(({ line }) => labels.has(line));
  const values = mendMarks(settleColumns(sampled, asking), around.measures, asking);
  const days = readDates(
    new Map(
      loose.dateColumn === null
        ? []
        : table.rows.filter(({ line }) => labels.has(line)).map(({ line, cells }) => [line, cells[loose.dateColumn!] ?? null]),
    ),
    { earliest: earliestClosing(around, labels), today: around.today },
    asking,
  );
  const closings = new Map(around.labels.map(({ code, closedOn }) => [code, closedOn]));
  const dates = settleDays(days, { closedOn: (line) => closings.get(labels.get(line) ?? '') ?? null, today: around.today }, asking);
  if (loose.values.length === 0 && asking.questions.length === 0) asking.say('noResults');
  if (values === null) return { list: [], titles: table.titles };
  return { list: readValues(values, { measures: around.measures, labels, dates, temperatureColumn: loose.temperatureColumn, isFahrenheit: loose.isFahrenheit }, asking), titles: table.titles };
}

function earliestClosing({ labels }: LabSurroundings, lines: ReadonlyMap<number, string>): string | null {
  const days = labels.filter(({ code }) => [...lines.values()].includes(code)).flatMap(({ closedOn }) => closedOn ?? []);
  return days.length === 0 ? null : days.sort()[0]!;
}

/** The same bag and measure on several lines, and bags that have results already. */
function settleRepeats(entries: readonly LabEntry[], around: LabSurroundings, asking: Asking): LabEntry[] {
  let kept = [...entries];
  const groups = [...groupBy(entries, ({ code, measure }) => `${code}|${measure}`).values()];
  const twice = groups.filter((group) => new Set(group.map(({ line }) => line)).size > 1);
  if (twice.length > 0) {
    const [first] = twice;
    const answer = asking.ask('repeats', { code: 'repeats', params: { label: first![0]!.code, values: first!.map(({ typed }) => typed).join('; '), count: twice.length }, choices: ['repeats', 'last', 'first'] });
    if (answer === null) kept = kept.filter((entry) => !twice.some((group) => group.includes(entry)));
    if (answer === 'last' || answer === 'first') {
      const line = (group: LabEntry[]) => (answer === 'last' ? Math.max : Math.min)(...group.map((entry) => entry.line));
      kept = groups.flatMap((group) => group.filter((entry) => entry.line === line(group)));
    }
  }
  const before = kept.filter(({ code, measure }) => around.labels.some((label) => label.code === code && label.has.includes(measure)));
  if (before.length > 0) {
    const answer = asking.ask('again', { code: 'again', params: { label: before[0]!.code, count: new Set(before.map(({ code }) => code)).size }, choices: ['repeat', 'replace', 'leaveOut'] });
    if (answer === null || answer === 'leaveOut') kept = kept.filter((entry) => !before.includes(entry));
  }
  return kept;
}
