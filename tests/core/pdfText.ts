import { inflateSync } from 'node:zlib';

interface Box {
  readonly x: number;
  readonly y: number;
  readonly width: number;
  readonly height: number;
}

/** What is written and drawn on each page of a PDF made by pdfkit: texts in order, boxes in points, filled squares in the units they were drawn in. */
export interface PdfPage {
  readonly width: number;
  readonly height: number;
  readonly texts: readonly string[];
  readonly boxes: readonly Box[];
  readonly fills: readonly Box[];
}

export function readPdf(bytes: Buffer): PdfPage[] {
  const source = bytes.toString('latin1');
  const objects = new Map([...source.matchAll(/(\d+) 0 obj\n([\s\S]*?)\nendobj/gu)].map(([, id, body]) => [id!, body!]));
  return [...objects.values()].filter((body) => /\/Type \/Page\b/u.test(body)).map((page) => {
    const [, width, height] = /\/MediaBox \[0 0 ([\d.]+) ([\d.]+)\]/u.exec(page)!;
    const content = contentOf(objects.get(/\/Contents (\d+) 0 R/u.exec(page)![1]!)!);
    return { width: Number(width), height: Number(height), texts: textsOf(content, lettersOfFonts(page, objects)), boxes: boxesOf(content), fills: fillsOf(content) };
  });
}

/** Of each font of a page the letters of its codes, from its table for copying text (ToUnicode; ISO 32000-1, 9.10.3). */
function lettersOfFonts(page: string, objects: ReadonlyMap<string, string>): Map<string, Map<number, string>> {
  const resources = objects.get(/\/Resources (\d+) 0 R/u.exec(page)![1]!)!;
  const listed = /\/Font <<([\s\S]*?)>>/u.exec(resources)?.[1] ?? '';
  return new Map([...listed.matchAll(/\/(F\d+) (\d+) 0 R/gu)].map(([, name, id]) => [name!, lettersOf(contentOf(objects.get(/\/ToUnicode (\d+) 0 R/u.exec(objects.get(id!)!)![1]!)!))]));
}

function lettersOf(table: string): Map<number, string> {
  const ranges = [...table.matchAll(/<([0-9a-f]+)> <[0-9a-f]+> \[([^\]]*)\]/gu)];
  return new Map(ranges.flatMap(([, from, listed]) => [...listed!.matchAll(/<([0-9a-f ]*)>/gu)].map(([, hex], i): [number, string] => [parseInt(from!, 16) + i, Buffer.from(hex!.replaceAll(' ', ''), 'hex').swap16().toString('utf16le')])));
}

function contentOf(body: string): string {
  const start = body.indexOf('stream\n') + 'stream\n'.length;
  const stream = Buffer.from(body.slice(start, body.lastIndexOf('\nendstream')), 'latin1');
  return inflateSync(stream).toString('latin1');
}

/** Hexadecimal pieces of one TJ are one text in the font set before; between them stands kerning. */
function textsOf(content: string, fonts: ReadonlyMap<string, ReadonlyMap<number, string>>): string[] {
  let letters: ReadonlyMap<number, string> | undefined;
  return [...content.matchAll(/\/(F\d+) [\d.]+ Tf|\[((?:<[0-9a-f]*> ?-?[\d.]* ?)+)\] TJ/gu)].flatMap(([, font, pieces]) => {
    if (font !== undefined) {
      letters = fonts.get(font);
      return [];
    }
    const codes = [...pieces!.matchAll(/<([0-9a-f]*)>/gu)].map(([, hex]) => hex!).join('').match(/.{4}/gu) ?? [];
    return [codes.map((code) => letters!.get(parseInt(code, 16)) ?? '\uFFFD').join('')];
  });
}

function boxesOf(content: string): PdfPage['boxes'] {
  return [...content.matchAll(/^(-?[\d.]+) (-?[\d.]+) ([\d.]+) ([\d.]+) re\nS$|^(-?[\d.]+) (-?[\d.]+) ([\d.]+) ([\d.]+) re\n[\d.]+ w\nS$/gmu)].map((found) => {
    const [x, y, width, height] = found.slice(1).filter((part) => part !== undefined).map(Number);
    return { x: x!, y: y!, width: width!, height: height! };
  });
}

function fillsOf(content: string): Box[] {
  const areas = [...content.matchAll(/((?:^-?[\d.]+ -?[\d.]+ [\d.]+ [\d.]+ re\n)+)(?:[^\n]* (?:cs|scn|sc|gs)\n)*f$/gmu)].map(([, boxes]) => boxes!);
  return areas.flatMap((boxes) => boxes.trim().split('\n').map((line) => {
    const [x, y, width, height] = line.split(' ').map(Number);
    return { x: x!, y: y!, width: width!, height: height! };
  }));
}
