import { execFileSync } from 'node:child_process';
import { existsSync, readFileSync } from 'node:fs';
import decodeQR from 'qr/decode.js';
import { readPdf, type PdfPage } from '../../core/pdfText.ts';

/** A page as a printer without colours would lay it down: one byte a pixel, 0 black. */
export interface GreyPage {
  readonly width: number;
  readonly height: number;
  readonly grey: Uint8Array;
}
export interface Printed {
  readonly pages: readonly PdfPage[];
  /** All that is written, read by a program that knows nothing of ours where the machine has one. */
  readonly words: string;
  /** Pages as pictures; null where the machine has no program that draws them. */
  readonly pictures: readonly GreyPage[] | null;
}

const dotsPerInch = 150;
const program = (name: string) => ['/usr/bin', '/usr/local/bin', '/opt/homebrew/bin'].map((folder) => `${folder}/${name}`).find((path) => existsSync(path)) ?? null;

/** A PDF that was printed, opened as others open it: poppler's pdftotext and pdftoppm, else our own reader for the words. */
export function readPrinted(file: string): Printed {
  const pages = readPdf(readFileSync(file));
  const [toText, toPicture] = [program('pdftotext'), program('pdftoppm')];
  return {
    pages,
    words: toText ? execFileSync(toText, ['-layout', '-enc', 'UTF-8', file, '-']).toString('utf8').replace(/\s+/gu, ' ') : pages.flatMap(({ texts }) => texts).join(' '),
    pictures: toPicture ? pages.map((_, index) => pictureOf(execFileSync(toPicture, ['-gray', '-r', String(dotsPerInch), '-f', String(index + 1), '-l', String(index + 1), file], { maxBuffer: 64 * 1024 * 1024 }))) : null,
  };
}

/** Portable graymap, as netpbm describes it: P5, width, height, largest value, then a byte a pixel. */
function pictureOf(graymap: Buffer): GreyPage {
  const [head, width, height] = /^P5\s+(\d+)\s+(\d+)\s+255\s/u.exec(graymap.subarray(0, 64).toString('latin1'))!;
  return { width: Number(width), height: Number(height), grey: graymap.subarray(head.length) };
}

/** What the code on a page says, read from its picture. Throws when there is none. */
export function codeOn({ width, height, grey }: GreyPage): string {
  const data = new Uint8Array(width * height * 4).fill(255);
  grey.forEach((value, at) => data.fill(value, 4 * at, 4 * at + 3));
  return decodeQR({ width, height, data });
}

/** Share of a page that is ink. */
export function inkOf({ grey }: GreyPage): number {
  return grey.reduce((sum, value) => sum + (255 - value), 0) / (255 * grey.length);
}
