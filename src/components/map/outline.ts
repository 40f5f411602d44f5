import type { LonLat } from '../../../shared/geo/coordinates.ts';
import { readNumber } from '../../lib/readNumber.ts';

/** Corners of an outline or line that is being drawn, without the closing repeat. */
export type Corners = readonly LonLat[];

export interface CornerText {
  readonly lon: string;
  readonly lat: string;
}

export function isLonLat(lon: number | null, lat: number | null): boolean {
  return lon !== null && lat !== null && Math.abs(lon) <= 180 && Math.abs(lat) <= 90;
}

/** Closed ring of a polygon drawn by its corners. */
export function ringFrom(corners: Corners): [number, number][] {
  return corners.length === 0 ? [] : [...corners, corners[0]!].map(([lon, lat]) => [lon, lat]);
}

/** Corners of a ring, without its closing repeat. */
export function cornersFrom(ring: readonly (readonly number[])[]): LonLat[] {
  const [first, last] = [ring[0], ring.at(-1)];
  const isClosed = first !== undefined && last !== undefined && ring.length > 1 && first[0] === last[0] && first[1] === last[1];
  return (isClosed ? ring.slice(0, -1) : ring).map((position) => [position[0]!, position[1]!] as const);
}

/**
 * Corners from pasted text: one corner a line, longitude and latitude apart by tab, semicolon, or comma and space.
 * Null when any line cannot be read, so that nothing is half taken.
 */
export function cornersFromText(text: string): LonLat[] | null {
  const lines = text.split(/\r?\n/).map((line) => line.trim()).filter((line) => line !== '');
  const corners = lines.map((line) => {
    const parts = line.split(/[\t;]+|,\s+|\s+/).filter((part) => part !== '');
    const split = parts.length === 1 ? line.split(',') : parts;
    const [lon, lat] = [readNumber(split[0] ?? ''), readNumber(split[1] ?? '')];
    return split.length >= 2 && isLonLat(lon, lat) ? ([lon!, lat!] as const) : null;
  });
  return corners.length > 0 && corners.every((corner) => corner !== null) ? (corners as LonLat[]) : null;
}

/** New corners with one changed, put in after, or taken out. */
export function withCorner(corners: Corners, index: number, corner: LonLat): LonLat[] {
  return corners.map((one, at) => (at === index ? corner : one));
}

export function withoutCorner(corners: Corners, index: number): LonLat[] {
  return corners.filter((_, at) => at !== index);
}

/** A corner half way to the next one. */
export function withCornerAfter(corners: Corners, index: number): LonLat[] {
  const [one, next] = [corners[index]!, corners[(index + 1) % corners.length]!];
  const half: LonLat = [(one[0] + next[0]) / 2, (one[1] + next[1]) / 2];
  return [...corners.slice(0, index + 1), half, ...corners.slice(index + 1)];
}
