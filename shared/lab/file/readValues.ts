import { correctRefractometer } from '../../cellar/temperature.ts';
import { markProved, readFigure, type DecimalMark } from '../figure.ts';
import { labUnit } from '../units.ts';
import { cellText } from './cells.ts';
import type { LooseValue } from './columns.ts';
import type { LabEntry, LabMeasure, RawCell } from './labFile.ts';
import { inOwnUnit, isPlausible, isUsual } from './plausible.ts';
import type { Asking } from './questions.ts';
import { isForeignUnit } from './foreignUnits.ts';
import { unitInCell } from './titles.ts';

interface Reading {
  readonly measures: readonly LabMeasure[];
  readonly labels: ReadonlyMap<number, string>;
  readonly dates: ReadonlyMap<number, string>;
  readonly temperatureColumn: number | null;
  readonly isFahrenheit: boolean;
  /** What becomes of a cell that is no figure, or far from any usual one; asked where nothing is said here. */
  readonly settle?: (cell: DoubtfulCell) => 'keep' | 'leaveOut';
}

export interface DoubtfulCell {
  readonly code: 'cellOdd' | 'cellDate' | 'cellUnread' | 'uncorrected';
  readonly line: number;
  readonly title: string;
  readonly text: string;
  readonly canKeep: boolean;
}

/** Turns cells into results in the measures' own units, and says in words how the first of each column was read. */
export function readValues(values: readonly LooseValue[], reading: Reading, asking: Asking): LabEntry[] {
  const mark = decimalMark(values, reading.measures, asking);
  const compensates = reading.temperatureColumn === null || !values.some(({ measure, unit }) => measure === 'brix' && unit === 'brix') ? 'none' : asking.ask('compensates', { code: 'compensates', choices: ['yes', 'no'] });
  const entries: LabEntry[] = [];
  for (const loose of values) {
    const code = reading.labels.get(loose.line);
    const figure = code === undefined ? null : figureOf(loose, { mark, reading, asking });
    const unit = figure === null ? null : unitOfCell(loose, figure.unit, { reading, asking });
    if (code === undefined || figure === null || unit === null) continue;
    const value = { ...loose, unit };
    const measure = reading.measures.find((each) => each.code === value.measure)!;
    let own = inOwnUnit(value.unit, figure.value);
    const temperature = temperatureOf(value, reading, mark);
    let corrected = false;
    if (compensates === 'no' && value.unit === 'brix' && temperature === null) {
      // Never silently uncorrected where the others of the file are corrected.
      const answer = settled({ code: 'uncorrected', line: value.line, title: value.title, text: cellText(value.cell), canKeep: true }, reading, asking);
      if (answer !== 'keep') continue;
    }
    if (compensates === 'no' && value.unit === 'brix' && temperature !== null) {
      const answer = correctRefractometer({ brix: own, temperatureC: temperature, compensates: false });
      if (answer.kind === 'corrected') {
        asking.say('corrected', { from: own, to: Number(answer.middle.toFixed(2)), low: Number(answer.low.toFixed(2)), high: Number(answer.high.toFixed(2)), temperature });
        own = answer.middle;
        corrected = true;
      }
      if (answer.kind === 'beyond' && beyondTable({ value, temperature, from: answer.fromC, to: answer.toC }, reading, asking) !== 'keep') continue;
    }
    if (Number.isNaN(own) || !isPlausible(measure, value.unit, figure.value)) {
      if (settled({ code: 'cellOdd', line: value.line, title: value.title, text: cellText(value.cell), canKeep: !Number.isNaN(own) }, reading, asking) !== 'keep') continue;
    }
    const unitTyped = labUnit(value.unit)?.shown ?? measure.unit;
    sayOnce(value, { shown: cellText(value.cell), read: Number(own.toFixed(measure.decimals + 1)), unit: measure.unit, unitTyped, below: figure.below }, asking);
    entries.push({
      line: value.line,
      code,
      measure: measure.code,
      value: Number(own.toFixed(6)),
      below: figure.below,
      typed: cellText(value.cell).slice(0, 40),
      unitTyped,
      analysedOn: reading.dates.get(value.line) ?? null,
      odd: !isUsual(measure, own),
      corrected,
    });
  }
  return entries;
}

function settled(cell: DoubtfulCell, { settle }: Reading, asking: Asking): string | null {
  if (settle) return settle(cell);
  const { code, line, title, text, canKeep } = cell;
  return asking.ask(`cell:${line}:${title}`, { code, params: { line, title, text }, choices: canKeep ? ['keep', 'leaveOut'] : ['leaveOut'] });
}

/** What becomes of readings that no published row corrects: asked once a file, since a warm morning is warm for every bag. */
function beyondTable({ value, temperature, from, to }: { value: LooseValue; temperature: number; from: number; to: number }, { settle }: Reading, asking: Asking): string | null {
  const { line, title } = value;
  if (settle) return settle({ code: 'uncorrected', line, title, text: cellText(value.cell), canKeep: true });
  return asking.ask('beyondTable', { code: 'beyondTable', params: { line, title, temperature, from, to }, choices: ['keep', 'leaveOut'] });
}

/** The decimal mark that the clear cells prove; asked only when ambiguous ones are left that could be either. */
function decimalMark(values: readonly LooseValue[], measures: readonly LabMeasure[], asking: Asking): DecimalMark | null {
  const texts = values.filter(({ cell }) => typeof cell === 'string');
  const proofs = new Set(texts.map(({ cell }) => markProved(cellText(cell))).filter((mark) => mark !== null));
  if (proofs.size === 2) asking.say('mixedMarks');
  const ambiguous = texts.filter(({ cell }) => readFigure(cellText(cell), null).kind === 'ambiguous');
  const open = ambiguous.filter((value) => onlyPossible(value, measures) === null);
  if (proofs.size === 1 && (ambiguous.length === 0 || open.length === 0 || [...proofs][0] === markIn(open[0]!))) return [...proofs][0]!;
  if (open.length === 0) return proofs.size === 1 ? [...proofs][0]! : null;
  const answer = asking.ask('decimal', { code: 'decimal', params: { example: cellText(open[0]!.cell), title: open[0]!.title }, choices: ['comma', 'point'] });
  return answer === null ? null : answer === 'comma' ? ',' : '.';
}

const markIn = ({ cell }: LooseValue) => cellText(cell).replace(/[^.,]/g, '').at(-1) as DecimalMark;

/** The one reading of an ambiguous cell that its measure allows; null when both or none are possible. */
function onlyPossible({ cell, measure, unit }: LooseValue, measures: readonly LabMeasure[]): number | null {
  const figure = readFigure(cellText(cell), null);
  if (figure.kind !== 'ambiguous') return null;
  const possible = [figure.asDecimal, figure.asThousands].filter((value) => isPlausible(measures.find(({ code }) => code === measure)!, unit, value));
  // A gravity means the same with and without its mark.
  const own = new Set(possible.map((value) => inOwnUnit(unit, value).toFixed(6)));
  return own.size === 1 ? possible[0]! : null;
}

function figureOf(value: LooseValue, { mark, reading, asking }: { mark: DecimalMark | null; reading: Reading; asking: Asking }): { value: number; below: boolean; unit: string } | null {
  const { cell, line, title } = value;
  if (typeof cell === 'number') return { value: cell, below: false, unit: '' };
  if (typeof cell === 'object' && cell !== null) {
    settled({ code: 'cellDate', line, title, text: cell.date, canKeep: false }, reading, asking);
    return null;
  }
  const text = cellText(cell);
  const possible = onlyPossible(value, reading.measures);
  if (possible !== null) return { value: possible, below: /^[<≤]/.test(text), unit: '' };
  const figure = readFigure(text, mark);
  if (figure.kind === 'number') return figure;
  // Until the mark is told the question about it stands; nothing more is asked of the cell.
  if (figure.kind === 'none') asking.say('noResult', { word: figure.word });
  if (figure.kind === 'unreadable') settled({ code: 'cellUnread', line, title, text, canKeep: false }, reading, asking);
  return null;
}

/** The column's unit, or the cell's own where it names another one and somebody says so; null while that is open, or left out. */
function unitOfCell({ line, title, cell, measure, unit }: LooseValue, written: string, { reading, asking }: { reading: Reading; asking: Asking }): string | null {
  if (isForeignUnit(written, measure)) {
    settled({ code: 'cellUnread', line, title, text: cellText(cell), canKeep: false }, reading, asking);
    return null;
  }
  const own = unitInCell(written, measure);
  if (own === null || own === unit) return unit;
  if (reading.settle) return reading.settle({ code: 'cellUnread', line, title, text: cellText(cell), canKeep: false }) === 'keep' ? unit : null;
  const answer = asking.ask(`cellUnit:${line}:${title}`, { code: 'cellUnit', params: { line, title, text: cellText(cell) }, choices: [own, unit, 'leaveOut'] });
  return answer === 'leaveOut' ? null : answer;
}

/** In °C; null where there is none, or none that juice has. */
function temperatureOf({ rowCells }: LooseValue, { temperatureColumn, isFahrenheit }: Reading, mark: DecimalMark | null): number | null {
  const cell: RawCell = temperatureColumn === null ? null : (rowCells[temperatureColumn] ?? null);
  const figure = readFigure(cellText(cell), mark);
  if (figure.kind !== 'number') return null;
  const celsius = isFahrenheit ? Number((((figure.value - 32) * 5) / 9).toFixed(1)) : figure.value;
  return celsius > -5 && celsius < 45 ? celsius : null;
}

function sayOnce({ title, measure }: LooseValue, read: { shown: string; read: number; unit: string; unitTyped: string; below: boolean }, asking: Asking): void {
  if (asking.words.some(({ code, params }) => code.startsWith('read') && params.title === title)) return;
  const { shown, unit, unitTyped } = read;
  const code = read.below ? 'readBelow' : unit === unitTyped ? 'read' : 'readConverted';
  asking.say(code, { title, measure, shown, value: read.read, unit: unit === 'pH' ? '' : unit, from: unitTyped });
}
