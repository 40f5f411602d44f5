import { Paper, type Face } from '../paper.ts';

export const ink = '#1C2B33';
export const faint = '#5A666D';
export const margin = 48;

/** An empty document with a page. */
export function openPage({ size, title, at, face = 'report' }: { size: 'A4' | 'Letter'; title: string; at: Date; face?: Face }): Paper {
  return new Paper({ face, size: size === 'A4' ? 'A4' : 'LETTER', margin, bufferPages: true, info: { Title: title, Creator: 'Patchrow', CreationDate: at } }).fillColor(ink);
}

/** `below`: points that must be left for it and what stands together with it. */
export function heading(page: Paper, text: string, below = 60): void {
  keepRoom(page, below);
  page.moveDown(0.8).font('bold').fontSize(11).fillColor(ink).text(text, margin).font('plain').fontSize(9).moveDown(0.2);
}

export function paragraph(page: Paper, text: string): void {
  page.font('plain').fontSize(9).fillColor(ink).text(text, margin, page.y, { width: innerWidth(page), lineGap: 1.5 });
}

/** Points that a heading takes with the space around it. */
const headingHeight = 25;

/** A heading and its paragraph on one page, down to the foot where they just fit. */
export function section(page: Paper, title: string, text: string): void {
  const height = page.font('plain').fontSize(9).heightOfString(text, { width: innerWidth(page), lineGap: 1.5 });
  if (page.y + headingHeight + height > page.page.height - margin) page.addPage();
  heading(page, title, 0);
  paragraph(page, text);
}

export function innerWidth(page: Paper): number {
  return page.page.width - 2 * margin;
}

/** A new page unless so many points are left above the foot. */
export function keepRoom(page: Paper, points: number): void {
  if (page.y + points > page.page.height - margin - 24) page.addPage();
}

export interface Column {
  head: string;
  /** Share of the width. */
  share: number;
  isFigure?: boolean;
}

/** A table with hairlines; `before` may draw into the first cell of a line, which then begins farther right. */
export function table(page: Paper, columns: readonly Column[], lines: readonly (readonly string[])[], before?: { width: number; draw: (line: number, x: number, y: number) => void }): void {
  const total = columns.reduce((sum, { share }) => sum + share, 0);
  const widths = columns.map(({ share }) => (share / total) * innerWidth(page));
  const lineOf = (cells: readonly string[], options: { face: string; colour: string; indent: number }): number => {
    page.font(options.face).fontSize(8.5).fillColor(options.colour);
    const boxes = cells.map((cell, index) => ({ text: cell, width: widths[index]! - 8 - (index === 0 ? options.indent : 0) }));
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
