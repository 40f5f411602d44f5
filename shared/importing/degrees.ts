import { cellNumber, type DecimalMark } from './cellNumbers.ts';

export interface ReadAngle {
  /** Decimal degrees, south and west negative; NaN when it is no angle. */
  degrees: number;
  /** The hemisphere letter, when there is one. */
  axis: 'lat' | 'lon' | null;
  /** Written in minutes or seconds. */
  isSexagesimal: boolean;
}

/**
 * Latitude or longitude in any usual writing: 44.8366, N44.8366, 44°50.2', 44° 50' 12" N, 44 50 12 N, 44:50:12.
 * O is west in French and Spanish, and is taken so.
 */
export function readAngle(cell: string, mark: DecimalMark): ReadAngle {
  const text = cell.trim().toUpperCase().replace('−', '-');
  const letter = /^([NSEWO])[^A-Z]*$/.exec(text)?.[1] ?? /^[^A-Z]*([NSEWO])$/.exec(text)?.[1] ?? null;
  const axis = letter === null ? null : 'NS'.includes(letter) ? 'lat' : 'lon';
  const body = letter === null ? text : text.replace(letter, '').trim();
  const simple = cellNumber(body.replace(/°$/, '').trim(), mark);
  const sign = letter !== null && 'SWO'.includes(letter) ? -1 : 1;
  if (!Number.isNaN(simple.value) && simple.unit === '') return { degrees: sign * simple.value, axis, isSexagesimal: false };
  const parts = body.match(/^([+-]?)(\d{1,3})[°:D\s]+(\d{1,2}(?:[.,]\d+)?)(?:['’′:M\s]+(\d{1,2}(?:[.,]\d+)?))?\s*(?:["”″S]|''|['’′])?$/);
  if (parts === null) return { degrees: NaN, axis, isSexagesimal: false };
  const [, minus, degrees, minutes, seconds] = parts;
  const number = (part: string | undefined): number => Number((part ?? '0').replace(',', '.'));
  if (number(minutes) >= 60 || number(seconds) >= 60) return { degrees: NaN, axis, isSexagesimal: true };
  const size = number(degrees) + number(minutes) / 60 + number(seconds) / 3600;
  return { degrees: (minus === '-' ? -1 : 1) * sign * size, axis, isSexagesimal: true };
}
