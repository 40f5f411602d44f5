import { readLabelCode } from '../../field/labelCode.ts';
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

/** The label in a cell, or null. */
export function labelIn(cell: RawCell | undefined): string | null {
  if (typeof cell !== 'string') return null;
  const read = readLabelCode(cell);
  return 'code' in read ? read.code : null;
}

/** Text to compare titles by: small letters, no accents, single blanks. */
export function plainText(text: string): string {
  return text.normalize('NFKD').replace(/\p{M}/gu, '').toLowerCase().replace(/[_\s]+/g, ' ').trim();
}

/** Holds a figure, whatever surrounds it. */
export function looksNumeric(cell: RawCell | undefined): boolean {
  if (typeof cell === 'number') return true;
  return typeof cell === 'string' && /^[<≤~≈]?\s*[+-]?[.,]?\d/.test(cell.trim()) && !/[a-z]{4,}/i.test(cell);
}
