import { createRequire } from 'node:module';
import PDFDocument from 'pdfkit';

export type Page = PDFKit.PDFDocument;

export const ink = '#1C2B33';
export const faint = '#5A666D';
export const margin = 48;

const { resolve } = createRequire(import.meta.url);
const fontFile = (weight: number) => resolve(`@fontsource/open-sans/files/open-sans-latin-${weight}-normal.woff`);

/** An empty document with its type faces; `plain` and `bold` are the two weights. */
export function openPage({ size, title, at }: { size: 'A4' | 'Letter'; title: string; at: Date }): Page {
  const page = new PDFDocument({ size: size === 'A4' ? 'A4' : 'LETTER', margin, bufferPages: true, info: { Title: title, Creator: 'Patchrow', CreationDate: at } });
  page.registerFont('plain', fontFile(400)).registerFont('bold', fontFile(600));
  return page.font('plain').fillColor(ink);
}

/** The bytes once everything is drawn. */
export function closePage(page: Page): Promise<Buffer> {
  return new Promise((resolve, reject) => {
    const parts: Buffer[] = [];
    page.on('data', (part: Buffer) => parts.push(part));
    page.on('end', () => resolve(Buffer.concat(parts)));
    page.on('error', reject);
    page.end();
  });
}

/** What the face can show: thin spaces become plain ones that do not break; characters it lacks lose their accents, and without a base letter become a question mark. */
export function printable(text: string): string {
  return [...text.replace(/[\u2009\u202F]/g, '\u00A0')].map((sign) => (isInFace(sign) ? sign : ([...sign.normalize('NFD')].filter((part) => isInFace(part) && !/\p{M}/u.test(part)).join('') || '?'))).join('');
}

function isInFace(sign: string): boolean {
  return /[\u0020-\u00FF\u0131\u0152\u0153\u02C6\u02DA\u02DC\u2010-\u2027\u2030-\u203A\u20AC\u2122\u2191\u2193\u2212\n]/.test(sign);
}

export function heading(page: Page, text: string): void {
  keepRoom(page, 60);
  page.moveDown(0.8).font('bold').fontSize(11).fillColor(ink).text(printable(text), margin).font('plain').fontSize(9).moveDown(0.2);
}

export function paragraph(page: Page, text: string): void {
  page.font('plain').fontSize(9).fillColor(ink).text(printable(text), margin, page.y, { width: innerWidth(page), lineGap: 1.5 });
}

export function innerWidth(page: Page): number {
  return page.page.width - 2 * margin;
}

/** A new page unless so many points are left above the foot. */
export function keepRoom(page: Page, points: number): void {
  if (page.y + points > page.page.height - margin - 24) page.addPage();
}

export interface Column {
  head: string;
  /** Share of the width. */
  share: number;
  isFigure?: boolean;
}

/** A table with hairlines; `before` may draw into the first cell of a line, which then begins farther right. */
export function table(page: Page, columns: readonly Column[], lines: readonly (readonly string[])[], before?: { width: number; draw: (line: number, x: number, y: number) => void }): void {
  const total = columns.reduce((sum, { share }) => sum + share, 0);
  const widths = columns.map(({ share }) => (share / total) * innerWidth(page));
  const lineOf = (cells: readonly string[], options: { face: string; colour: string; indent: number }): number => {
    page.font(options.face).fontSize(8.5).fillColor(options.colour);
    const boxes = cells.map((cell, index) => ({ text: printable(cell), width: widths[index]! - 8 - (index === 0 ? options.indent : 0) }));
    const height = Math.max(...boxes.map(({ text, width }) => page.heightOfString(text, { width })));
    keepRoom(page, height + 8);
    const top = page.y + 3;
    let x = margin;
    boxes.forEach(({ text, width }, index) => {
      page.text(text, x + (index === 0 ? options.indent : 0), top, { width, align: columns[index]!.isFigure ? 'right' : 'left' });
      x += widths[index]!;
    });
    page.y = top + height + 3;
    page.moveTo(margin, page.y).lineTo(margin + innerWidth(page), page.y).lineWidth(0.4).strokeColor('#9AA4A9').stroke();
    return top;
  };
  lineOf(columns.map(({ head }) => head), { face: 'bold', colour: faint, indent: 0 });
  lines.forEach((cells, index) => {
    const top = lineOf(cells, { face: 'plain', colour: ink, indent: before?.width ?? 0 });
    before?.draw(index, margin, top);
  });
  page.x = margin;
}
