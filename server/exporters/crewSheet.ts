import QRCode from 'qrcode';
import type { DayStop, FieldRound, WalkStop } from '../../shared/contracts/rounds.ts';
import { restrictionsWithin } from '../../shared/field/entry.ts';
import { latLonText } from '../../shared/geo/latLonText.ts';
import { dayBounds } from '../../shared/season/dayBounds.ts';
import { minutes } from './daySheet.ts';
import { measureWords } from './measureWords.ts';
import { Paper } from './paper.ts';
import { drawSheetStrip } from './sheetStrip.ts';
import { paperLocale, sheetTexts, type SheetLanguage } from './sheetTexts.ts';

/** One person's walk on paper, in black and white. */
export interface SheetPart {
  round: FieldRound;
  person: string;
  language: SheetLanguage;
}

export interface SheetOptions {
  paper: 'a4' | 'letter';
  link: string;
  timeZone: string;
}

type Texts = (typeof sheetTexts)[SheetLanguage];
const sizeOf = ({ paper }: Pick<SheetOptions, 'paper'>) => (paper === 'a4' ? 'A4' : 'LETTER');

const edge = 36;
const lineHeight = 30;
const stripHeight = 132;
/** Four lines of the table's head. */
const mostHeadHeight = 44;

/** The walks of a round as PDF: a page run a person, vines in walking order with large boxes, safety card and QR to the round. */
export async function crewSheet(parts: readonly SheetPart[], options: SheetOptions): Promise<Buffer> {
  const pdf = new Paper({ face: 'sheet', size: sizeOf(options), margin: edge, autoFirstPage: false, info: { Title: parts[0] ? `${parts[0].round.blockName} ${parts[0].round.onDate}` : 'Sheet', Creator: 'Patchrow' } });
  const code = await QRCode.toBuffer(options.link, { errorCorrectionLevel: 'Q', margin: 4, scale: 6 });
  for (const part of parts) drawPart(pdf, part, { ...options, code });
  return pdf.toBytes();
}

function drawPart(pdf: Paper, part: SheetPart, options: SheetOptions & { code: Buffer }): void {
  const texts = sheetTexts[part.language];
  let page = 1;
  const layout = isWide(part, options) ? 'landscape' : 'portrait';
  const newPage = () => pdf.addPage({ size: sizeOf(options), margin: edge, layout });
  newPage();
  drawFoot(pdf, part, page);
  drawHead(pdf, part, options);
  const { startPostColour, endPostColour } = part.round;
  const strip = { x: edge, y: pdf.y + 6, width: pdf.page.width - 2 * edge, height: stripHeight };
  if (isWithoutRows(part.round)) pdf.font('plain').fontSize(10).text(texts.withoutRows, strip.x, strip.y, { width: strip.width });
  else drawSheetStrip(pdf, part.round, strip, { row: texts.row, start: texts.colours[startPostColour], end: texts.colours[endPostColour] });
  const columns = columnsOf(pdf, part);
  let y = drawTableHead(pdf, columns, { texts, y: (isWithoutRows(part.round) ? pdf.y : strip.y + stripHeight) + 8 });
  for (const stop of part.round.stops) {
    if (y + lineHeight > pdf.page.height - edge - 16) {
      newPage();
      drawFoot(pdf, part, ++page);
      y = drawTableHead(pdf, columns, { texts, y: edge });
    }
    drawStop(pdf, columns, { stop, round: part.round, texts, y });
    y += lineHeight;
  }
}

/** Sheets of several people lie on one pile: each page says whose it is. */
function drawFoot(pdf: Paper, { round, person, language }: SheetPart, page: number): void {
  pdf.font('plain').fontSize(8).text(`${round.blockName}, ${person}. ${sheetTexts[language].page} ${page}`, edge, pdf.page.height - edge - 9, { lineBreak: false });
}

function drawHead(pdf: Paper, { round, person, language }: SheetPart, { code, timeZone }: SheetOptions & { code: Buffer }): void {
  const texts = sheetTexts[language];
  const day = new Intl.DateTimeFormat(paperLocale(language), { timeZone: 'UTC', weekday: 'long', day: 'numeric', month: 'long', year: 'numeric' }).format(new Date(`${round.onDate}T12:00:00Z`));
  const side = 92;
  const width = pdf.page.width - 2 * edge - side - 12;
  pdf.image(code, pdf.page.width - edge - side, edge, { width: side });
  pdf.font('plain').fontSize(8).text(texts.scan, pdf.page.width - edge - side, edge + side, { width: side, align: 'center' });
  pdf.font('bold').fontSize(20).text(`${round.blockName}, ${person}`, edge, edge, { width });
  pdf.fontSize(12).text(day, { width });
  pdf.font('plain').text(`${round.stops.length} ${texts.vines}.${round.gate ? ` ${texts.start}${texts.colon}${round.gate}` : ''}`, { width });
  pdf.text(round.zones.filter(({ targets }) => targets > 0).map(({ number, name, targets }) => `${texts.zone} ${number}${name && name !== `Zone ${number}` ? ` (${name})` : ''}${texts.colon}${targets}`).join('   '), { width });
  drawDay(pdf, round, { texts, width });
  if (round.notes) pdf.text(round.notes, { width });
  const sided = isWithoutRows(round) ? [] : round.measures.flatMap(({ rowSide = 'either', code, name }) => (rowSide === 'either' ? [] : [`${measureWords[language]?.[code] ?? (name || code)}, ${texts.sides[rowSide]}`]));
  const handfuls = round.measures.flatMap(({ handful, ...measure }) =>
    handful
      ? [
          `${headOf(measure, language)}${texts.colon}${handful.perVine} ${texts.clusters}${handful.perCluster === null ? '' : `, ${handful.perCluster} ${texts.berries}`}`,
        ]
      : [],
  );
  const inBag = round.measures.filter(({ measuredIn }) => measuredIn === 'lab').map(({ code, name }) => measureWords[language]?.[code] ?? (name || code));
  if (inBag.length > 0) pdf.text(`${texts.bag}${texts.colon}${inBag.join(', ')}`, { width });
  if (sided.length > 0) pdf.font('bold').text(`${texts.side}${texts.colon}${sided.join('; ')}`, { width }).font('plain');
  if (handfuls.length > 0) pdf.text(`${texts.ofEach}${texts.colon}${handfuls.join('; ')}`, { width });
  pdf.fontSize(9).text(texts.plan, { width });
  pdf.y = Math.max(pdf.y, edge + side + 14);
  drawSafety(pdf, { round, texts, language, timeZone });
}

/** What else the day holds, so that nobody goes home after the first block; in its order where it was sent as one. */
function drawDay(pdf: Paper, { id, day }: FieldRound, { texts, width }: { texts: Texts; width: number }): void {
  if (day.length < 2) return;
  const blockWords = ({ block, vines }: DayStop) => `${block}, ${vines} ${texts.vines}`;
  if (day.every(({ place }) => place === null)) {
    pdf.text(`${texts.alsoToday}${texts.colon}${day.filter(({ roundId }) => roundId !== id).map(blockWords).join('; ')}`, { width });
    return;
  }
  pdf.text(`${texts.dayOrder}${texts.colon}`, { width, continued: true });
  day.forEach((stop, index) => {
    const way = stop.wayS === null ? '' : ` (${minutes(stop.wayS)})`;
    const isHere = stop.roundId === id;
    pdf.font(isHere ? 'bold' : 'plain').text(`${index + 1} ${isHere ? `${stop.block}, ${texts.thisSheet}` : blockWords(stop)}${way}${index < day.length - 1 ? '; ' : ''}`, { width, continued: index < day.length - 1 });
  });
  pdf.font('plain');
}

function drawSafety(pdf: Paper, { round, texts, language, timeZone }: { round: FieldRound; texts: Texts; language: SheetLanguage; timeZone: string }): void {
  const width = pdf.page.width - 2 * edge;
  const rule = () => pdf.moveTo(edge, pdf.y).lineTo(edge + width, pdf.y).lineWidth(1.5).stroke();
  rule();
  pdf.y += 4;
  const moment = new Intl.DateTimeFormat(paperLocale(language), { timeZone, weekday: 'short', day: 'numeric', month: 'short', hour: '2-digit', minute: '2-digit' });
  const told = (time: string) => moment.format(new Date(time));
  // The whole of the estate's day: the sheet is printed before and carried until evening.
  const closed = restrictionsWithin(round.restrictions, { ...dayBounds(timeZone, round.onDate), rowIds: round.stops.map(({ rowId }) => rowId) });
  for (const { startsAt, endsAt, product, labelInterval, setBy } of closed)
    pdf
      .font('bold')
      .fontSize(14)
      .text(
        `${texts.restricted} ${told(endsAt)} (${told(startsAt)} – ${told(endsAt)}${texts.colon}${product}, ${setBy}; ${labelInterval})`,
        edge,
        pdf.y,
        { width },
      );
  if (closed.length === 0) pdf.font('plain').fontSize(9).text(`${texts.noRestriction} (${told(round.checkedAt)})`, edge, pdf.y, { width });
  // A paper does not learn of what is typed later: it says of when it speaks.
  pdf.font('plain').fontSize(9).text(closed.length === 0 ? texts.law : `${texts.asOf} ${told(round.checkedAt)}. ${texts.law}`, { width });
  pdf.text(`${texts.safety} ${texts.meeting}${texts.colon}${round.safety.meetingPoint || '-'}. ${texts.emergency}${texts.colon}${round.safety.emergencyNumber || '-'}.`, { width });
  pdf.font('bold').text(texts.notVine, { width });
  pdf.y += 4;
  rule();
}

interface Column {
  x: number;
  width: number;
  head: (texts: Texts) => string;
  text: (stop: WalkStop, round: FieldRound, texts: Texts) => string;
  box?: (stop: WalkStop) => boolean;
  bold?: boolean;
  /** Points; by default 15 in bold and 11 else. */
  size?: number;
}

/** Vines without rows are found by coordinates. */
const isWithoutRows = ({ stops }: FieldRound) => stops.some(({ place }) => place !== undefined);

/** A box narrower than this is no box for a hand that wears a glove. */
const leastBox = 42;
const fixedWidth = 344;

/** Many measures need the long side of the paper. */
function isWide(part: SheetPart, options: Pick<SheetOptions, 'paper'>): boolean {
  const portrait = options.paper === 'a4' ? 595 : 612;
  return (portrait - 2 * edge - fixedWidth) / boxesOf(part).reduce((sum, { shares }) => sum + shares, 0) < leastBox;
}

interface Box {
  /** Room it takes beside the others. */
  shares: number;
  head: (texts: Texts) => string;
  box: (stop: WalkStop) => boolean;
}

/** A box for each measure that is read at the vine; what goes to the laboratory goes into a bag, whose label is written down. */
function boxesOf({ round, language }: SheetPart): Box[] {
  const laboratory = round.measures.filter(({ measuredIn }) => measuredIn === 'lab');
  const field = round.measures.filter(({ measuredIn }) => measuredIn === 'field');
  const goesToLab = (stop: WalkStop) => laboratory.some(({ code }) => stop.measures.includes(code));
  // With nothing to read at the vine somebody may still carry an instrument.
  const read = (field.length > 0 ? field : laboratory).map((measure): Box => ({ shares: 1, head: () => headOf(measure, language), box: (stop) => stop.measures.includes(measure.code) }));
  return laboratory.length > 0 ? [...read, { shares: 1.6, head: ({ bag }) => bag, box: goesToLab }] : read;
}

function columnsOf(pdf: Paper, part: SheetPart): Column[] {
  const fixed: Omit<Column, 'x'>[] = isWithoutRows(part.round) ? [
    { width: 26, head: () => '', text: ({ number }) => String(number) },
    { width: 132, head: ({ place }) => place, text: ({ place }) => (place ? latLonText(place) : '-'), bold: true, size: 11 },
    { width: 44, head: ({ placeNo }) => placeNo, text: ({ rowLabel, vineNumber }) => `${rowLabel}-${vineNumber}` },
    { width: 34, head: ({ zone }) => zone, text: ({ zone }) => String(zone) },
    { width: 108, head: ({ reserve }) => reserve, text: ({ reserve }) => (reserve?.place ? latLonText(reserve.place) : '-'), size: 9 },
  ] : [
    { width: 26, head: () => '', text: ({ number }) => String(number) },
    { width: 58, head: ({ row }) => row, text: ({ rowLabel, rowLabelWas }) => (rowLabelWas ? `${rowLabel} (${rowLabelWas})` : rowLabel), bold: true },
    { width: 74, head: ({ from }) => from, text: fromWords },
    { width: 44, head: ({ vine }) => vine, text: ({ vineNumber }) => String(vineNumber), bold: true },
    { width: 46, head: ({ ahead }) => ahead, text: ({ ahead, aheadFrom }) => (aheadFrom === 'lastVine' ? `+${ahead}` : String(ahead)) },
    { width: 34, head: ({ zone }) => zone, text: ({ zone }) => String(zone) },
    { width: 62, head: ({ reserve }) => reserve, text: ({ reserve }) => (reserve ? `${reserve.rowLabel} / ${reserve.vineNumber}` : '-') },
  ];
  const wanted = boxesOf(part);
  const share = (pdf.page.width - 2 * edge - fixedWidth) / wanted.reduce((sum, { shares }) => sum + shares, 0);
  const boxes = wanted.map(({ shares, head, box }): Omit<Column, 'x'> => ({ width: shares * share, head, text: () => '', box }));
  let x = edge;
  return [...fixed, ...boxes].map((column) => {
    const placed = { ...column, x };
    x += column.width;
    return placed;
  });
}

/** The measure in the reader's language; a unit that only repeats the name is left out. */
function headOf({ code, name, unit }: Pick<FieldRound['measures'][number], 'code' | 'name' | 'unit'>, language: SheetLanguage): string {
  const word = measureWords[language]?.[code] ?? (name || code);
  return unit === 'clusters' || unit === 'berries' || word.split(' ').includes(unit) ? word : `${word}, ${unit}`;
}

function fromWords({ enterBy, heading, aheadFrom }: WalkStop, round: FieldRound, texts: Texts): string {
  if (aheadFrom === 'lastVine') return texts.on;
  const isStart = enterBy === 'start' || (enterBy !== 'end' && heading === 'toEnd');
  return texts.colours[isStart ? round.startPostColour : round.endPostColour];
}

function drawTableHead(pdf: Paper, columns: readonly Column[], { texts, y }: { texts: Texts; y: number }): number {
  pdf.font('bold').fontSize(9);
  // Longer words than a box is wide take another line, so that no unit is cut off.
  const height = Math.min(mostHeadHeight, Math.max(22, ...columns.map(({ width, head }) => Math.ceil(pdf.heightOfString(head(texts), { width: width - 4 })))));
  for (const { x, width, head } of columns) pdf.text(head(texts), x + 2, y, { width: width - 4, height, ellipsis: true });
  pdf.moveTo(edge, y + height + 2).lineTo(pdf.page.width - edge, y + height + 2).lineWidth(1.5).stroke();
  return y + height + 4;
}

function drawStop(pdf: Paper, columns: readonly Column[], { stop, round, texts, y }: { stop: WalkStop; round: FieldRound; texts: Texts; y: number }): void {
  for (const { x, width, text, box, bold, size = bold ? 15 : 11 } of columns) {
    if (box) {
      if (box(stop)) pdf.rect(x + 3, y + 2, width - 6, lineHeight - 5).lineWidth(1.2).stroke();
      continue;
    }
    pdf.font(bold ? 'bold' : 'plain').fontSize(size).text(text(stop, round, texts), x + 2, y + (size > 11 ? 7 : 9), { width: width - 4, lineBreak: false });
  }
  pdf.moveTo(edge, y + lineHeight - 1).lineTo(pdf.page.width - edge, y + lineHeight - 1).lineWidth(0.5).stroke();
}
