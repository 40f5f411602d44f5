import QRCode from 'qrcode';
import { spellLabelCode } from '../../shared/field/labelCode.ts';
import { latLonText } from '../../shared/geo/latLonText.ts';
import { labelTexts, type LabelLanguage } from './labelTexts.ts';
import { Paper } from './paper.ts';

/** What stands on a label beside its code; null for a blank label, which has lines to write on. */
export interface LabelFacts {
  block: string;
  date: string;
  zone: string;
  /** Null for a bag that takes a whole zone. */
  vine: { row: string; number: number; place?: readonly [lon: number, lat: number] | undefined } | null;
  stop: number;
  measures: string;
  person: string;
}

export interface PrintedLabel {
  code: string;
  facts: LabelFacts | null;
}

/** `single` is one label a page, for a label printer. */
export type LabelPaper = 'a4' | 'letter' | 'single';

interface Layout {
  page: [number, number];
  columns: number;
  rows: number;
  label: { width: number; height: number };
  first: { x: number; y: number };
  gapX: number;
}

const mm = 72 / 25.4;

/** Millimetres. The two sheets are those of the usual office labels, 14 on A4 and 10 on Letter; plain paper is cut along the lines. */
const layouts: Record<LabelPaper, Layout> = {
  a4: { page: [210, 297], columns: 2, rows: 7, label: { width: 99.1, height: 38.1 }, first: { x: 4.65, y: 15.15 }, gapX: 2.5 },
  letter: { page: [215.9, 279.4], columns: 2, rows: 5, label: { width: 101.6, height: 50.8 }, first: { x: 3.97, y: 12.7 }, gapX: 4.76 },
  single: { page: [70, 40], columns: 1, rows: 1, label: { width: 70, height: 40 }, first: { x: 0, y: 0 }, gapX: 0 },
};

/** One module a millimetre: 21 of a six-letter code and the quiet zone of four on each side that readers need (ISO/IEC 18004). */
const moduleMm = 1;
const quietModules = 4;

/** Bag labels as PDF, in black and white. The QR code holds the bare code at the highest error correction, so that a creased or wet label still reads. */
export async function labelSheet(labels: readonly PrintedLabel[], options: { paper: LabelPaper; language: LabelLanguage; title: string }): Promise<Buffer> {
  const layout = layouts[options.paper];
  const pdf = new Paper({ face: 'sheet', size: [layout.page[0] * mm, layout.page[1] * mm], margin: 0, autoFirstPage: false, info: { Title: options.title, Creator: 'Patchrow' } });
  const perPage = layout.columns * layout.rows;
  labels.forEach((label, index) => {
    const place = index % perPage;
    if (place === 0) pdf.addPage();
    const x = layout.first.x + (place % layout.columns) * (layout.label.width + layout.gapX);
    const y = layout.first.y + Math.floor(place / layout.columns) * layout.label.height;
    pdf.save().scale(mm).translate(x, y);
    drawLabel(pdf, label, { layout, texts: labelTexts[options.language], isSheet: perPage > 1 });
    pdf.restore();
  });
  return pdf.toBytes();
}

type Drawing = { layout: Layout; texts: (typeof labelTexts)[LabelLanguage]; isSheet: boolean };

function drawLabel(pdf: Paper, { code, facts }: PrintedLabel, { layout, texts, isSheet }: Drawing): void {
  const { width, height } = layout.label;
  if (isSheet) pdf.rect(0, 0, width, height).lineWidth(0.1).strokeColor('#999999').stroke();
  const side = drawCode(pdf, code, { x: 1, y: (height - 29) / 2 });
  const x = side + 2;
  const room = width - x - 2;
  pdf.fillColor('black').font('bold');
  const size = Math.min(10.5, (10 * room) / pdf.fontSize(10).widthOfString(spellLabelCode(code)));
  const top = (height - 33) / 2;
  pdf.fontSize(size).text(spellLabelCode(code), x, top, { lineBreak: false });
  if (facts) drawFacts(pdf, facts, { x, y: top + size + 0.6, room, texts });
  else drawLines(pdf, { x, y: top + size + 3, room, texts });
}

/** Draws the modules as squares, so that any printer prints them sharp. Returns the right edge of the quiet zone. */
function drawCode(pdf: Paper, code: string, at: { x: number; y: number }): number {
  const { modules } = QRCode.create(code, { errorCorrectionLevel: 'H' });
  const start = quietModules * moduleMm;
  for (let row = 0; row < modules.size; row++) {
    for (let column = 0; column < modules.size; column++) {
      if (modules.get(row, column)) pdf.rect(at.x + start + column * moduleMm, at.y + start + row * moduleMm, moduleMm, moduleMm);
    }
  }
  pdf.fill('black');
  return at.x + (modules.size + 2 * quietModules) * moduleMm;
}

function drawFacts(pdf: Paper, facts: LabelFacts, { x, y, room, texts }: { x: number; y: number; room: number; texts: Drawing['texts'] }): void {
  const { block, date, zone, vine, stop, measures, person } = facts;
  const line = (words: string, font: string, size: number, down: number) => pdf.font(font).fontSize(size).text(words, x, y + down, { width: room, height: size * 1.2, ellipsis: true, lineBreak: false });
  // Which vine or stop it is must not be cut off: the letters shrink before a number does.
  const whole = (words: string, font: string, size: number, down: number) => line(words, font, fittingSize(pdf, words, { font, size, room }), down);
  whole(`${texts.zone} ${zone}`, 'bold', 4.4, 0);
  const vineWords = vine?.place ? latLonText(vine.place) : vine ? `${texts.row} ${vine.row}  ${texts.vine} ${vine.number}` : null;
  whole(vineWords ?? `${texts.wholeZone} ${stop}`, vine ? 'bold' : 'plain', vine ? 4.4 : 3, 5.2);
  line(`${block}, ${date}`, 'plain', 3, 10.6);
  line(vine ? `${texts.stop} ${stop}, ${person}` : person, 'plain', 3, 14.2);
  line(measures, 'plain', 3, 17.8);
}

const leastSizeMm = 2.1;

/** The size at which the words fit the room, not below what is read at arm's length. */
function fittingSize(pdf: Paper, words: string, { font, size, room }: { font: string; size: number; room: number }): number {
  const width = pdf.font(font).fontSize(size).widthOfString(words);
  return Math.max(leastSizeMm, Math.min(size, (0.98 * size * room) / width));
}

/** Lines to write on, for a label that nobody has bound yet. */
function drawLines(pdf: Paper, { x, y, room, texts }: { x: number; y: number; room: number; texts: Drawing['texts'] }): void {
  [texts.block, texts.zone, `${texts.row} / ${texts.vine}`, texts.date].forEach((word, index) => {
    const base = y + index * 5;
    pdf.font('plain').fontSize(2.8).text(word, x, base, { lineBreak: false });
    pdf.moveTo(x + 15, base + 3).lineTo(x + room, base + 3).lineWidth(0.15).strokeColor('black').stroke();
  });
}
