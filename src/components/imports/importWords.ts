import type { ImportNote, ImportQuestion, ImportView, QuestionChoice } from '../../../shared/contracts/imports.ts';
import type { Format } from '../../lib/format.ts';
import type { ChipKind } from '../base/StateChip.vue';
import type { IconName } from '../base/iconPaths.ts';

interface Words {
  readonly t: (key: string, named: Record<string, unknown>, plural?: number) => string;
  readonly te: (key: string) => boolean;
  readonly format: Format;
}

/** State of a line as its chip says it. Outlines wait for a person as questions do. */
export function lineState(line: Pick<ImportView, 'state' | 'outlines'>): { word: 'reading' | 'asks' | 'placing' | 'ready' | 'refused'; kind: ChipKind; icon: IconName | null | undefined } {
  if (line.state === 'refused') return { word: 'refused', kind: 'stop', icon: 'close' };
  if (line.state === 'done') return { word: 'ready', kind: 'done', icon: undefined };
  if (line.state === 'ready' && line.outlines.length === 0) return { word: 'placing', kind: 'plain', icon: 'hourglass' };
  return line.state === 'reading' ? { word: 'reading', kind: 'plain', icon: 'file' } : { word: 'asks', kind: 'asks', icon: undefined };
}

/** True when only a person can bring the line on. */
export function asksPerson(line: ImportView): boolean {
  return lineState(line).word === 'asks';
}

/** What was understood of a file, in one or two sentences. */
export function understoodWords(line: ImportView, { t, format }: Words): string {
  const file = line.understood;
  if (file === null) return '';
  const parts: string[] = [];
  if (file.kind === 'raster') {
    parts.push(t('imports.understood.bands', { n: format.number(file.bands.length) }, file.bands.length));
    if (file.pixelSizeM !== null) parts.push(t('imports.understood.pixels', { size: format.withUnit('length', file.pixelSizeM, 2) }));
  } else if (file.kind === 'vector') {
    const count = file.layers.reduce((sum, layer) => sum + layer.count, 0);
    parts.push(t('imports.understood.shapes', { n: format.number(count) }, count));
  } else {
    parts.push(t('imports.understood.points', { n: format.number(file.count) }, file.count));
    const aside = file.setAside.reduce((sum, { count }) => sum + count, 0);
    if (aside > 0) parts.push(t('imports.understood.setAside', { n: format.number(aside) }, aside));
  }
  if (file.reference !== null) parts.push(file.reference);
  return [`${parts.join(', ')}.`, coversWords(line, { t, format })].filter((part) => part !== '').join(' ');
}

function coversWords(line: ImportView, { t, format }: Pick<Words, 't' | 'format'>): string {
  if (line.state === 'done' && line.layers.length > 0) return t('imports.placedAs', { types: format.list([...new Set(line.layers.map((layer) => t(`layers.type.${layer.type}`, {}).toLowerCase()))]) });
  if (line.covers.length === 0) return '';
  const named = line.covers.slice(0, 4).map((block) => (block.share > 0.995 ? block.name : t('imports.partOf', { block: block.name, share: format.percent(Math.floor(block.share * 100) / 100) })));
  const more = line.covers.length - named.length;
  return t('imports.liesOn', { blocks: format.list(more > 0 ? [...named, t('imports.moreBlocks', { n: format.number(more) }, more)] : named) });
}

/** A note or a refusal in the reader's language where we have the sentence, for a refusal the nearest one to its reason; else as the reader of the file said it. */
export function noteWords(note: ImportNote, kind: 'problem' | 'note', { t, te, format }: Words): { text: string; detail: string | null } {
  const why = `imports.why.${note.params.why ?? ''}`;
  const isExact = kind === 'problem' && note.params.why !== undefined && te(why);
  const key = isExact ? why : `imports.${kind}.${note.code}`;
  if (!te(key)) return { text: note.text, detail: null };
  const named = shownParams(note.params, format);
  const count = note.params.count ?? note.params.shapes;
  return { text: typeof count === 'number' ? t(key, named, count) : t(key, named), detail: kind === 'problem' && !isExact ? note.text : null };
}

/** Why a question is asked, in the reader's language where we have the sentence. Null where the question says enough. */
export function reasonWords(question: ImportQuestion, { t, te, format }: Words): string | null {
  const why = question.why && te(`imports.askWhy.${question.why.code}`) ? question.why : null;
  if (why) return t(`imports.askWhy.${why.code}`, shownParams(why.params, format));
  const key = `imports.ask.${question.code}Why`;
  return te(key) ? t(key, {}) : question.reason;
}

const shownParams = (params: ImportNote['params'], format: Format) => Object.fromEntries(Object.entries(params).map(([name, value]) => [name, typeof value === 'number' ? format.number(value, Number.isInteger(value) ? 0 : 2) : value]));

/** The words of an answer: the file's own, or ours for the value. */
export function choiceWords(question: Pick<ImportQuestion, 'code'>, choice: QuestionChoice, { t, te, format }: Words): string {
  if (bandQuestions.has(question.code)) return bandWords(choice, { t, format });
  if (choice.label !== null && !['noData', 'maskBand', 'swapAxes', 'placement'].includes(question.code)) return choice.label;
  const value = String(choice.value);
  const key = `imports.choice.${question.code}.${value}`;
  if (te(key)) return t(key, {});
  if (question.code === 'noData' && typeof choice.value === 'number') return t('imports.choice.noData.value', { value: format.number(choice.value, Number.isInteger(choice.value) ? 0 : 2) });
  return choice.label ?? value;
}

/** An answer that was given, for the line that sums them up. */
export function answerWords(question: ImportQuestion, words: Words): string {
  if (question.kind === 'date') return typeof question.answer === 'string' ? words.format.date(question.answer, 'year') : words.t('imports.notKnown', {});
  const choice = question.choices.find((each) => each.value === question.answer);
  return choice ? choiceWords(question, choice, words) : String(question.answer);
}

export const letterOf = (index: number): string => String.fromCharCode(65 + index);

const bandQuestions = new Set(['band', 'nirBand', 'redBand', 'greenBand', 'redEdgeBand']);
const colour = /^colour:(red|green|blue|palette|alpha)$/;

/** A band by its number, with what the file calls it or which colour it is. */
function bandWords({ value, label }: QuestionChoice, { t, format }: Pick<Words, 't' | 'format'>): string {
  const n = typeof value === 'number' ? format.number(value) : String(value);
  const named = colour.exec(label ?? '');
  const name = named ? t(`imports.band.${named[1]!}`, {}) : label;
  return name ? t('imports.band.named', { n, name }) : t('imports.band.plain', { n });
}
