import { createRequire } from 'node:module';
import PDFDocument from 'pdfkit';
import * as fontkit from 'fontkit';

/**
 * A PDF with type faces that hold the letters of Europe (Latin with all accents, Greek, Cyrillic), under the names `plain` and
 * `bold`. Whatever is written goes through `printable`, since names of people and blocks come in any script.
 */

const { resolve } = createRequire(import.meta.url);
const openSans = (cut: string) => resolve(`@expo-google-fonts/open-sans/${cut}/OpenSans_${cut}.ttf`);
const arimo = (cut: string) => resolve(`@expo-google-fonts/arimo/${cut}/Arimo_${cut}.ttf`);

/** Reports are set in the face of the screens; sheets and labels, tight for room, in a narrower one. */
const faces = {
  report: { plain: openSans('400Regular'), bold: openSans('600SemiBold') },
  sheet: { plain: arimo('400Regular'), bold: arimo('700Bold') },
} as const;
export type Face = keyof typeof faces;

export class Paper extends PDFDocument {
  readonly #signs: ReadonlySet<number>;

  constructor(options: PDFKit.PDFDocumentOptions & { readonly face: Face }) {
    super(options);
    const { plain, bold } = faces[options.face];
    this.#signs = signsOf(plain);
    this.registerFont('plain', plain).registerFont('bold', bold).font('plain');
  }

  override text(...[text, ...rest]: unknown[]): this {
    return super.text(printable(String(text), this.#signs), ...(rest as []));
  }

  override heightOfString(text: string, options?: PDFKit.Mixins.TextOptions): number {
    return super.heightOfString(printable(text, this.#signs), options);
  }

  /** The bytes once everything is drawn. */
  toBytes(): Promise<Buffer> {
    return new Promise((done, fail) => {
      const parts: Buffer[] = [];
      this.on('data', (part: Buffer) => parts.push(part));
      this.on('end', () => done(Buffer.concat(parts)));
      this.on('error', fail);
      this.end();
    });
  }
}

const known = new Map<string, ReadonlySet<number>>();

/** Code points that a face has letters for. */
function signsOf(file: string): ReadonlySet<number> {
  const found = known.get(file);
  if (found) return found;
  const font = fontkit.openSync(file);
  const signs = new Set('characterSet' in font ? font.characterSet : []);
  known.set(file, signs);
  return signs;
}

/** No line begins with what ends a phrase, nor breaks within quotation marks: French sets spaces there (Unicode Standard Annex 14, spaces in French typography). */
const unbroken = (text: string) => text.replace(/ (?=[;:!?»])/g, '\u00A0').replace(/« /g, '«\u00A0');

/** What a reader takes for one character, however many code points it is joined of (Unicode Standard Annex 29). */
const characters = new Intl.Segmenter(undefined, { granularity: 'grapheme' });

/** What the face can show: thin spaces become plain ones that do not break; characters it lacks lose their accents, and without a base letter become one question mark. */
function printable(written: string, signs: ReadonlySet<number>): string {
  const text = unbroken(written);
  if (/^[\n -~]*$/u.test(text)) return text;
  const has = (sign: string) => sign === '\n' || signs.has(sign.codePointAt(0)!);
  const shown = (character: string): string => {
    if ([...character].every(has)) return character;
    const left = [...character].map((sign) => (has(sign) ? sign : [...sign.normalize('NFD')].filter((part) => has(part) && !/\p{M}/u.test(part)).join(''))).join('');
    // Joiners and accents alone, which a face may well have, are nothing to read.
    return /[^\p{M}\p{Cf}]/u.test(left) ? left : '?';
  };
  return Array.from(characters.segment(text.normalize('NFC').replace(/[\u2009\u202F]/gu, '\u00A0')), ({ segment }) => shown(segment)).join('');
}
