import { LABEL_LETTERS, readLabelCode } from '../../field/labelCode.ts';
import type { RawCell } from './labFile.ts';

/** A cell's text as a person sees it. */
export function cellText(cell: RawCell | undefined): string {
  if (cell === null || cell === undefined) return '';
  if (typeof cell === 'object') return cell.date;
  return String(cell).trim();
}

export function isBlank(cell: RawCell | undefined): boolean {
  return cellText(cell) === '';
}

/**
 * The label in a cell, or null: alone, behind the apostrophe that spreadsheets take for text, or with words of the lab's own
 * beside it ("Furrow 2, TRK WMH") when there is exactly one that its check letter proves.
 */
export function labelIn(cell: RawCell | undefined): string | null {
  if (typeof cell !== 'string') return null;
  const text = cell.trim().replace(/^['’`"]+|['’`"]+$/g, '');
  const read = readLabelCode(text);
  if ('code' in read) return read.code;
  const within = [...text.toUpperCase().matchAll(groups)].map(([group]) => readLabelCode(group)).flatMap((each) => ('code' in each ? [each.code] : []));
  return within.length === 1 ? within[0]! : null;
}

const groups = new RegExp(`(?<![A-Z0-9])[${LABEL_LETTERS}]{3}[ -]?[${LABEL_LETTERS}]{3}(?![A-Z0-9])`, 'gu');

/** Text to compare titles by: small letters, no accents, single blanks. */
export function plainText(text: string): string {
  return text.normalize('NFKD').replace(/\p{M}/gu, '').toLowerCase().replace(/[_\s]+/g, ' ').trim();
}

/** Holds a figure, whatever surrounds it. */
export function looksNumeric(cell: RawCell | undefined): boolean {
  if (typeof cell === 'number') return true;
  return typeof cell === 'string' && /^[<≤~≈]?\s*[+-]?[.,]?\d/.test(cell.trim()) && !/[a-z]{4,}/i.test(cell);
}
