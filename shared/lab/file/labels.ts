import { spellLabelCode } from '../../field/labelCode.ts';
import { cellText, labelIn, plainText } from './cells.ts';
import type { KnownLabel, RawCell } from './labFile.ts';
import type { Asking } from './questions.ts';

/** Rows of a laboratory's own: means, blanks, controls, standards, sums. */
const notASample = /^ø|^(mean|average|avg|moyenne|media|promedio|mittel|sd|ecart|std|stdev|blank|blanc|blanco|bianco|branco|control|controle|qc|standard|etalon|patron|total|sum|n|min|max|cv)\b/;
const mostRows = 30;

/** A word beside the label that says that the line sums up others, so that a mean is no further reading of the bag. */
const meanWord = /^(mean|average|avg|moyenne|moy|media|promedio|prom|mittel|mittelwert|durchschnitt|mw)\.?$/;

/** Lines of single readings; means that carry the label of their bag are said to be left out. */
export function withoutMeans<Row extends { readonly line: number; readonly cells: readonly RawCell[] }>(rows: readonly Row[], codeColumn: number, asking: Asking): Row[] {
  return rows.filter(({ line, cells }) => {
    const word = cells.find((cell, column) => column !== codeColumn && typeof cell === 'string' && meanWord.test(plainText(cell)));
    if (word === undefined || labelIn(cells[codeColumn]) === null) return true;
    asking.say('notASample', { line, text: `${cellText(cells[codeColumn])} ${cellText(word)}` });
    return false;
  });
}

interface LabelRow {
  readonly line: number;
  readonly cell: RawCell;
}

/**
 * The bag of each line. A label that no bag of the estate carries, and a cell that a spreadsheet changed into a date, a
 * number or an exponent, are asked about one by one: nothing is guessed, near labels are only offered.
 */
export function matchLabels(rows: readonly LabelRow[], known: readonly KnownLabel[], asking: Asking): ReadonlyMap<number, string> {
  const found = new Map<number, string>();
  const open: LabelRow[] = [];
  for (const row of rows) {
    const code = labelIn(row.cell);
    if (code !== null && known.some((label) => label.code === code)) found.set(row.line, code);
    else if (code === null && notASample.test(plainText(cellText(row.cell)))) asking.say('notASample', { line: row.line, text: cellText(row.cell) });
    else open.push(row);
  }
  const left = known.filter(({ code }) => ![...found.values()].includes(code));
  if (open.length > mostRows) {
    asking.ask('rows', { code: 'rows', params: { count: open.length, example: cellText(open[0]!.cell) }, choices: ['leaveOut'] });
    return found;
  }
  for (const row of open) {
    const answer = askRow(row, left, asking);
    if (answer !== null && answer !== 'leaveOut') found.set(row.line, answer);
  }
  return found;
}

function askRow({ line, cell }: LabelRow, left: readonly KnownLabel[], asking: Asking): string | null {
  const text = cellText(cell);
  const near = left.filter(({ code }) => isNear(code, text));
  const offered = near.length > 0 ? [...near, ...left.filter((label) => !near.includes(label))] : left;
  return asking.ask(`row:${line}:${text}`, {
    code: changed(cell), params: { line, text: text === '' ? '–' : text },
    choices: [...offered.slice(0, 60).map(({ code }) => ({ value: code, label: spellLabelCode(code) })), { value: 'leaveOut', label: null }],
    suggestion: near.length === 1 ? near[0]!.code : null,
  });
}

/** Which sentence the question needs: what the spreadsheet seems to have done to the cell. */
function changed(cell: RawCell): string {
  const text = cellText(cell);
  if (typeof cell === 'object' && cell !== null) return 'rowDate';
  if (/^\d[.,]?\d*e[+-]?\d+$/i.test(text)) return 'rowExponent';
  if (typeof cell === 'number' || /^\d+$/.test(text)) return 'rowNumber';
  return text === '' ? 'rowEmpty' : 'row';
}

/** One letter wrong, missing or too many; figures that look like letters count as them. */
function isNear(code: string, text: string): boolean {
  const typed = text.toUpperCase().replace(/[\s\-–./_]/g, '').replace(/0/g, 'D').replace(/5/g, 'S').replace(/8/g, 'B').replace(/2/g, 'Z');
  if (typed.length === code.length) return [...code].filter((letter, at) => letter !== typed[at]).length <= 1;
  if (Math.abs(typed.length - code.length) !== 1) return false;
  const [longer, shorter] = typed.length > code.length ? [typed, code] : [code, typed];
  return [...longer].some((_, at) => longer.slice(0, at) + longer.slice(at + 1) === shorter);
}
