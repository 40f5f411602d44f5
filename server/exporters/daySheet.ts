import type { DayStop } from '../../shared/contracts/rounds.ts';
import type { Paper } from './paper.ts';
import { innerWidth, margin, openPage } from './report/reportPage.ts';
import { paperLocale, sheetTexts, type SheetLanguage } from './sheetTexts.ts';

/** What one person walks on a day. */
export interface DayPart {
  person: string;
  language: SheetLanguage;
  /** `closed` says until when a block may not be entered, in the person's language. */
  stops: readonly (DayStop & { closed: string | null })[];
}

export interface DaySheetOptions {
  paper: 'a4' | 'letter';
  estateName: string;
  onDate: string;
  meetingPoint: string;
  emergencyNumber: string;
  at: Date;
}

/** The day's blocks in order, a page a person, in black and white: where next, how far, how much, and when it should be done. */
export async function daySheet(parts: readonly DayPart[], options: DaySheetOptions): Promise<Buffer> {
  const page = openPage({ size: options.paper === 'a4' ? 'A4' : 'Letter', title: `${options.estateName} ${options.onDate}`, at: options.at, face: 'sheet' });
  page.fillColor('black');
  parts.forEach((part, index) => {
    if (index > 0) page.addPage();
    drawPart(page, part, options);
  });
  return page.toBytes();
}

function drawPart(page: Paper, { person, language, stops }: DayPart, options: DaySheetOptions): void {
  const texts = sheetTexts[language];
  const day = new Intl.DateTimeFormat(paperLocale(language), { timeZone: 'UTC', weekday: 'long', day: 'numeric', month: 'long', year: 'numeric' }).format(new Date(`${options.onDate}T12:00:00Z`));
  page.font('bold').fontSize(22).text(person, margin, margin, { width: innerWidth(page) });
  page.fontSize(13).text(day).font('plain').fontSize(11).text(options.estateName);
  page.y += 10;
  let doneS = 0;
  stops.forEach((stop, index) => {
    doneS += (stop.wayS ?? 0) + stop.workS;
    if (stop.wayS !== null) wayLine(page, `${texts.way} ${minutes(stop.wayS)}`);
    drawStop(page, { stop, number: index + 1, words: [`${stop.vines} ${texts.vines}, ${minutes(stop.workS)}`, stop.gate && `${texts.start}: ${stop.gate}`, `${texts.doneAfter} ${minutes(doneS)}`] });
    if (stop.closed !== null) page.font('bold').fontSize(12).text(stop.closed, margin + numberWidth, page.y - 10, { width: innerWidth(page) - numberWidth });
  });
  page.y += 14;
  page.font('plain').fontSize(10).text(`${texts.law} ${texts.meeting}: ${options.meetingPoint || '-'}. ${texts.emergency}: ${options.emergencyNumber || '-'}. ${texts.safety}`, margin, page.y, { width: innerWidth(page) });
}

const numberWidth = 44;
const lineHeight = 62;

/** A line with a large number, the block, and a box to tick when it is done. */
function drawStop(page: Paper, { stop, number, words }: { stop: DayStop; number: number; words: readonly string[] }): void {
  if (page.y + lineHeight > page.page.height - margin - 40) page.addPage();
  const top = page.y;
  const width = innerWidth(page);
  page.moveTo(margin, top).lineTo(margin + width, top).lineWidth(1.5).stroke('black');
  page.font('bold').fontSize(26).text(String(number), margin, top + 8, { width: numberWidth, lineBreak: false });
  page.fontSize(17).text(stop.block, margin + numberWidth, top + 8, { width: width - numberWidth - 50, height: 24, ellipsis: true });
  page.font('plain').fontSize(11).text(words.filter(Boolean).join('. '), margin + numberWidth, top + 34, { width: width - numberWidth - 50, height: 16, ellipsis: true });
  page.rect(margin + width - 34, top + 12, 30, 30).lineWidth(1.5).stroke('black');
  page.y = top + lineHeight;
}

function wayLine(page: Paper, text: string): void {
  page.font('plain').fontSize(10).text(text, margin + numberWidth, page.y - 4, { lineBreak: false });
  page.y += 12;
}

/** "1 h 25 min", the same in all five languages. */
export function minutes(seconds: number): string {
  const whole = Math.max(1, Math.round(seconds / 60));
  return whole < 60 ? `${whole} min` : `${Math.floor(whole / 60)} h ${String(whole % 60).padStart(2, '0')} min`;
}
