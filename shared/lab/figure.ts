/** Figures as laboratories and people write them into a cell. */

export type DecimalMark = ',' | '.';

export type Figure =
  | { readonly kind: 'number'; readonly value: number; readonly below: boolean; readonly unit: string }
  /** Nothing was measured: an empty cell or a word that says so. */
  | { readonly kind: 'none'; readonly word: string }
  | { readonly kind: 'unreadable' }
  /** One mark with three figures behind it: decimals or thousands. */
  | { readonly kind: 'ambiguous'; readonly asDecimal: number; readonly asThousands: number; readonly below: boolean };

const nothing = /^(?:-+|–|—|n\.?\s?\/?\s?a\.?|n\.?\s?d\.?|n\.?\s?r\.?|s\.?\s?d\.?|null|none|nan|#n\/?[ad]!?|#div\/0!|#value!|#ref!|#[¡\w/!?]+|tr\.?|traces?|pending|en cours|in corso|em curso|en curso|< ?(?:lod|loq|ld|lq|dl|mdl))$/i;
const shape = /^(?<sign>[<≤>≥~≈=]*)\s*(?<figure>[+-]?\d[\d.,\s'’]*|[+-]?[.,]\d+)(?:\s*(?:±|\+\/-|\+-)\s*[\d.,]+)?\s*(?<exponent>e[+-]?\d+)?\s*(?<unit>[^\d<>±]*[^<>±]{0,12})?$/iu;

/** Figures that belong to units: H2SO4, g/100 mL, a hundred berries, powers, reference temperatures. */
const figuresOfUnits = /h2so4|c4h6o6|h2t|100 ?(?:ml|g|b\w*)|(?:l|m|dm|cm)\s?\^?[-⁻]?[13]\b|20 ?\/ ?20|(?:@|at|à|a|bei) ?20|20 ?°c/giu;

/** Reads one cell. `mark` decides about "1,234"; without it such a cell is ambiguous. */
export function readFigure(text: string, mark: DecimalMark | null): Figure {
  const plain = text.trim().replace(/\u2212/g, '-').replace(/^["']+|["']+$/g, '').trim();
  if (plain === '' || nothing.test(plain)) return { kind: 'none', word: plain };
  const parts = shape.exec(plain)?.groups;
  if (!parts) return { kind: 'unreadable' };
  const below = /^[<≤]/.test(parts.sign ?? '');
  if (/[>≥]/.test(parts.sign ?? '')) return { kind: 'unreadable' };
  // A sign behind the figure doubts it or belongs to something else.
  if (/^[-–—?!]/.test(parts.unit ?? '')) return { kind: 'unreadable' };
  const power = parts.exponent ? 10 ** Number(parts.exponent.slice(1)) : 1;
  // A second figure in the cell ("23.4-23.8", "2.1 (1:2)") is not left out silently.
  if (/\d/.test((parts.unit ?? '').replace(figuresOfUnits, ''))) return { kind: 'unreadable' };
  const read = readNumberText(parts.figure!.replace(/[\s'’]+$/, ''), mark);
  if (read === null) return { kind: 'unreadable' };
  if (read.length === 2) return { kind: 'ambiguous', asDecimal: read[0] * power, asThousands: read[1] * power, below };
  return { kind: 'number', value: read[0] * power, below, unit: (parts.unit ?? '').replace(/[*†‡]/g, '').trim() };
}

/** One number, two for an ambiguous text (as decimal, as thousands), null for none. */
function readNumberText(text: string, mark: DecimalMark | null): [number] | [number, number] | null {
  // Blanks and apostrophes can only divide thousands, and then every group has three figures.
  if (/[\s'’]/.test(text)) {
    if (!/^[+-]?\d{1,3}(?:[\s'’]\d{3})+(?:[.,]\d+)?$/.test(text)) return null;
    return [Number(text.replace(/[\s'’]/g, '').replace(',', '.'))];
  }
  const marks = text.replace(/[^.,]/g, '');
  if (marks === '') return [Number(text)];
  const last = marks.at(-1) as DecimalMark;
  const decimal = (sign: string) => Number(text.replaceAll(sign === ',' ? '.' : ',', '').replace(sign, '.'));
  if (marks.includes('.') && marks.includes(',')) return marks.indexOf(last) === marks.length - 1 && grouped(text, last === ',' ? '.' : ',') ? [decimal(last)] : null;
  const thousands = Number(text.replaceAll(last, ''));
  if (marks.length > 1) return new RegExp(`^[+-]?\\d{1,3}(?:\\${last}\\d{3})+$`).test(text) ? [thousands] : null;
  const [before, behind] = text.replace(/^[+-]/, '').split(last) as [string, string];
  if (behind.length !== 3 || before === '' || before === '0' || before.length > 3 || before.startsWith('0')) return [decimal(last)];
  if (mark !== null) return mark === last ? [decimal(last)] : [thousands];
  return [decimal(last), thousands];
}

function grouped(text: string, sign: string): boolean {
  return new RegExp(`^[+-]?\\d{1,3}(?:\\${sign}\\d{3})+[.,]\\d+$`).test(text);
}

/** Which mark a cell proves to be the decimal one; null when it proves neither. */
export function markProved(text: string): DecimalMark | null {
  const figure = readFigure(text, null);
  if (figure.kind !== 'number') return null;
  const marks = text.replace(/[^.,]/g, '');
  if (marks === '') return null;
  const last = marks.at(-1) as DecimalMark;
  // Several of one kind divide thousands, so the decimal mark is the other one.
  if (marks.length > 1 && new Set(marks).size === 1) return last === ',' ? '.' : ',';
  return last;
}
