import type { NoticeBody, NoticeDifference } from '../../../shared/contracts/notices.ts';
import { noticeTexts } from '../../mail/noticeTexts.ts';

type Texts = (typeof noticeTexts)[keyof typeof noticeTexts];

/** What differs between a notice and the one that it replaces, in the order people need it. */
export function differencesBetween(before: NoticeBody, after: NoticeBody): NoticeDifference[] {
  const told = { before: factsOf(before), after: factsOf(after) };
  return (['pickOn', 'fromTime', 'lotName', 'zones', 'tank', 'tonnes', 'note'] as const)
    .filter((what) => told.before[what] !== told.after[what])
    .map((what) => ({ what, before: told.before[what], after: told.after[what] }));
}

/** Stands for a fact that a notice does not name. */
const nothing = '–';

function factsOf({ pickOn, fromTime, lotName, zones, tank, tonnes, note }: NoticeBody): Record<NoticeDifference['what'], string> {
  return {
    pickOn,
    fromTime,
    lotName,
    zones: zones.map((zone) => `${zone.blockName} ${zone.number}${zone.rows ? ` (${zone.rows.join(', ')})` : ''}`).join('; '),
    tank: tank ?? nothing,
    tonnes: tonnes === null ? nothing : tonnes.value.toFixed(1),
    note: note === '' ? nothing : note,
  };
}

/** Without what a reader may not see: crews pick, and are told neither tonnes nor tank. */
export function withoutTonnes(body: NoticeBody): NoticeBody {
  return { ...body, tonnes: null, tank: null };
}

export function withoutTonnesDifferences(differences: readonly NoticeDifference[]): NoticeDifference[] {
  return differences.filter(({ what }) => what !== 'tonnes' && what !== 'tank');
}

/** The notice as plain text in the reader's language: what it replaces and what changed come first. */
export function noticeText(body: NoticeBody, how: { language: string; replacesNumber: number | null; differences: readonly NoticeDifference[] }): string {
  const texts = textsIn(how.language);
  const date = (day: string) => dateWords(how.language, day);
  const tonnes = (value: number) => new Intl.NumberFormat(how.language, { minimumFractionDigits: 1, maximumFractionDigits: 1 }).format(value);
  const shown = (what: string, value: string) => (what === 'pickOn' ? date(value) : what === 'tonnes' && value !== nothing ? `${tonnes(Number(value))} t` : value);
  const lines = [
    ...(how.replacesNumber === null ? [] : [fill(texts.replaces, { number: how.replacesNumber })]),
    ...(how.differences.length === 0 ? [] : [texts.changed, ...how.differences.map(({ what, before, after }) => `- ${fill(texts.was, { what: wordOf(texts, what), before: shown(what, before), after: shown(what, after) })}`), '']),
    fill(texts.pick, { lot: body.lotName, date: date(body.pickOn), time: body.fromTime }),
    fill(texts.zones, { zones: body.zones.map((zone) => `${zone.blockName} ${texts.zone} ${zone.number}${zone.rows ? `, ${fill(texts.rows, { rows: zone.rows.join(', ') })}` : ''}`).join('; ') }),
    ...(body.tonnes === null ? [] : [fill(texts.tonnes, { tonnes: `${tonnes(body.tonnes.value)}${body.tonnes.halfWidth === null ? '' : ` ± ${tonnes(body.tonnes.halfWidth)}`} t` })]),
    ...(body.tank === null ? [] : [fill(texts.tank, { tank: body.tank })]),
    ...(body.note === '' ? [] : [body.note]),
    '',
    texts.caution,
  ];
  return lines.join('\n');
}

function wordOf(texts: Texts, what: NoticeDifference['what']): string {
  const words = { pickOn: texts.pickOn, fromTime: texts.fromTime, lotName: texts.lotName, zones: texts.zonesWord, tank: texts.tankWord, tonnes: texts.tonnesWord, note: texts.noteWord };
  return words[what];
}

/** A day as people say it, such as "Friday 12 September". */
export function dateWords(language: string, day: string): string {
  const text = new Intl.DateTimeFormat(language === 'en' ? 'en-GB' : language, { timeZone: 'UTC', weekday: 'long', day: 'numeric', month: 'long' }).format(new Date(`${day}T12:00:00Z`));
  return language === 'fr' ? text.replace(/ 1 /, ' 1er ') : text;
}

/** Words around a notice on paper. */
export function sheetWords(language: string): { title: string; scan: string; void: string; voidAlone: string; over: string } {
  const { title, scan, void: replaced, voidAlone, over } = textsIn(language);
  return { title, scan, void: replaced, voidAlone, over };
}

/** Sentence of a notice that was taken back without another in its place. */
export function withdrawnWords(language: string): string {
  return textsIn(language).withdrawn;
}

function textsIn(language: string): Texts {
  return noticeTexts[language as keyof typeof noticeTexts] ?? noticeTexts.en;
}

export function fill(template: string, facts: Record<string, string | number>): string {
  return template.replace(/\{(\w+)\}/g, (place, key: string) => String(facts[key] ?? place));
}
