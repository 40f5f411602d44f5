import QRCode from 'qrcode';
import { innerWidth, margin, openPage } from './report/reportPage.ts';

export interface NoticeSheet {
  title: string;
  estateName: string;
  /** The notice in the reader's language, line by line. */
  text: string;
  /** Where the code leads: a page that says whether this number still holds. */
  link: string;
  /** Under the code. */
  scan: string;
  /** Printed across a notice that no longer holds; null while it does. */
  voidWords: string | null;
  now: Date;
}

const side = 120;

/** A pick notice on paper, large enough to read in a yard, with a code that tells later whether it still holds. */
export async function noticeSheet(sheet: NoticeSheet): Promise<Buffer> {
  const page = openPage({ size: 'A4', title: sheet.title, at: sheet.now });
  const code = await QRCode.toBuffer(sheet.link, { errorCorrectionLevel: 'Q', margin: 4, scale: 6 });
  const right = page.page.width - margin - side;
  page.image(code, right, margin, { width: side });
  page.fontSize(8).text(sheet.scan, right, margin + side + 2, { width: side, align: 'center' });
  page.font('bold').fontSize(22).text(sheet.title, margin, margin, { width: innerWidth(page) - side - 16 });
  page.font('plain').fontSize(12).text(sheet.estateName, { width: innerWidth(page) - side - 16 });
  if (sheet.voidWords !== null) page.moveDown(0.4).font('bold').fontSize(16).text(sheet.voidWords, { width: innerWidth(page) - side - 16 }).font('plain');
  page.y = Math.max(page.y, margin + side + 40);
  page.fontSize(13).text(sheet.text, margin, page.y, { width: innerWidth(page), lineGap: 4 });
  return page.toBytes();
}
