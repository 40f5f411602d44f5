import { sumFigures } from '../../../shared/cellar/dependent.ts';
import type { ReviewView } from '../../../shared/contracts/tickets.ts';
import { numberText } from '../../../shared/numberText.ts';
import { innerWidth, margin, openPage, paragraph, faint } from './reportPage.ts';
import { seasonLetterTexts, type LetterLanguage } from './seasonLetterTexts.ts';

export interface SeasonLetter {
  language: LetterLanguage;
  size: 'A4' | 'Letter';
  units: 'metric' | 'us';
  now: Date;
  timeZone: string;
  estateName: string;
  seasonName: string;
  block: ReviewView['blocks'][number];
  zones: ReviewView['zones'];
  errorParts: ReviewView['errorParts'];
}

const shortTons = 1.1023113;
const tonsPerAcre = 0.44609;
/** Fewer or more readings than this share of what was needed are worth a word. */
const worthAWord = 0.15;

/** Half a page on a block: what was expected, what came, what it cost to know, what to do less of. */
export async function seasonLetter(letter: SeasonLetter): Promise<Buffer> {
  const texts = seasonLetterTexts[letter.language];
  const title = filled(texts.title, { block: letter.block.blockName });
  const page = openPage({ size: letter.size, title, at: letter.now });
  page.font('bold').fontSize(18).text(title, margin, margin).font('plain');
  page.fontSize(9).fillColor(faint).text(filled(texts.line, { estate: letter.estateName, season: letter.seasonName, day: dayText(letter, letter.now) }), { width: innerWidth(page) });
  page.moveDown(0.6);
  for (const part of letterParts(letter)) {
    paragraph(page, part.join(' '));
    page.moveDown(0.6);
  }
  page.moveDown(0.8).fontSize(8).fillColor(faint).text(texts.caution, margin, page.y, { width: innerWidth(page) });
  return page.toBytes();
}

/** The letter's sentences, paragraph by paragraph: what came, whether the zones told it apart, what it cost to know. */
export function letterParts(letter: SeasonLetter): string[][] {
  const texts = seasonLetterTexts[letter.language];
  const { block } = letter;
  // A load that was shared out says nothing of how zones differ.
  const told = block.measures.filter(({ basis }) => basis !== 'shared');
  const nameOf = ({ measure, basis }: (typeof told)[number]) => texts.measure[(basis === 'weighed' || basis === 'bins' ? 'weighed' : measure) as keyof typeof texts.measure];
  const zones = [...told.map((measure) => filled(measure.differ === true ? texts.differ : texts.same, { measure: nameOf(measure), difference: differenceText(letter, measure) })), texts.verdict[block.verdict]];
  if (block.zones > 1 && block.oneLot) zones.push(texts.oneLot);
  const cost = [block.readings === 0 ? texts.noReadings : filled(texts.cost, { hours: timeText(letter, block.hours), readings: filled(block.readings === 1 ? texts.reading : texts.readings, { n: figure(letter, block.readings, 0) }) })];
  if (block.sugar) {
    const { taken, needed } = block.sugar;
    cost.push(filled(taken > needed * (1 + worthAWord) ? texts.less : taken < needed * (1 - worthAWord) ? texts.more : texts.right, { taken, needed }));
  }
  return [weighedSentences(letter), zones, cost];
}

function weighedSentences(letter: SeasonLetter): string[] {
  const texts = seasonLetterTexts[letter.language];
  const last = letter.zones.map(({ forecastOn }) => forecastOn).sort().at(-1);
  const zones = letter.zones.filter(({ forecastOn }) => forecastOn === last);
  if (last === undefined) return [texts.nothingWeighed];
  const total = (of: (zone: (typeof zones)[number]) => number) => zones.reduce((sum, zone) => sum + of(zone), 0);
  const { halfWidth: half } = sumFigures(zones.map(({ forecast }) => ({ factor: 1, figure: forecast })));
  const held = zones.filter((zone) => zone.held === true).length;
  const heldText = held === zones.length ? texts.held : held === 0 ? texts.missed : filled(texts.heldSome, { held, n: zones.length });
  const said = [filled(texts.expected, { day: dayText(letter, new Date(`${last}T12:00:00Z`)), forecast: tonnesText(letter, total(({ forecast }) => forecast.value), half), actual: tonnesText(letter, total(({ actualT }) => actualT), null), held: heldText })];
  if (zones.some(({ how }) => how === 'shared')) said.push(texts.shared);
  const [first] = letter.errorParts;
  if (first) said.push(filled(texts.error, { part: texts.part[first.part], tonnes: tonnesText(letter, Math.abs(first.tonnes), null) }));
  return said;
}

function differenceText(letter: SeasonLetter, { measure, difference, halfWidth, unit }: ReviewView['blocks'][number]['measures'][number]): string {
  const isYield = measure === 'yield';
  const factor = isYield && letter.units === 'us' ? tonsPerAcre : 1;
  const shownUnit = isYield && letter.units === 'us' ? ` ${seasonLetterTexts[letter.language].tonsPerAcre}` : measure === 'ph' ? '' : ` ${unit}`;
  const decimals = measure === 'ph' ? 2 : 1;
  return `${figure(letter, difference * factor, decimals)}${halfWidth === null ? '' : ` ± ${figure(letter, halfWidth * factor, decimals)}`}${shownUnit}`;
}

function tonnesText(letter: SeasonLetter, tonnes: number, half: number | null): string {
  const factor = letter.units === 'us' ? shortTons : 1;
  return `${figure(letter, tonnes * factor, 1)}${half === null ? '' : ` ± ${figure(letter, half * factor, 1)}`} ${letter.units === 'us' ? seasonLetterTexts[letter.language].shortTons : 't'}`;
}

function figure({ language }: SeasonLetter, value: number, decimals: number): string {
  return numberText(value, decimals, regionOf(language));
}

/** Whole hours, or minutes below two hours, with the unit as the language counts it ("1 minute", "5 hours"). */
function timeText({ language }: SeasonLetter, hours: number): string {
  const [value, unit] = hours < 2 ? [Math.max(1, Math.round(hours * 60)), 'minute'] : [Math.round(hours), 'hour'];
  return new Intl.NumberFormat(regionOf(language), { style: 'unit', unit, unitDisplay: 'long' }).format(value);
}

function regionOf(language: LetterLanguage): string {
  return language === 'en' ? 'en-GB' : language === 'pt' ? 'pt-PT' : language;
}

function dayText({ language, timeZone }: SeasonLetter, day: Date): string {
  const text = new Intl.DateTimeFormat(regionOf(language), { timeZone, day: 'numeric', month: 'long', year: 'numeric' }).format(day);
  return language === 'fr' ? text.replace(/^1 /, '1er ') : text;
}

function filled(template: string, facts: Record<string, string | number>): string {
  return template.replace(/\{(\w+)\}/g, (place, key: string) => String(facts[key] ?? place));
}
