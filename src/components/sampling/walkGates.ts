import type { BlockRowView } from '../../../shared/contracts/rows.ts';

/** How a start is chosen: the block's own gate, a post of a row, or a place tapped on the map. */
export const walkStarts = ['recorded', 'rowEnd', 'place'] as const;
export type WalkStart = (typeof walkStarts)[number];

export interface WalkSettings {
  readonly from: WalkStart;
  /** "lon,lat", or null for the block's own gate. */
  readonly gate: string | null;
  readonly end: 'gate' | 'anywhere';
  readonly people: number;
}

/** A row with its two posts as starts of a walk. */
export interface RowEnds {
  readonly rowId: string;
  readonly label: string;
  readonly start: string;
  readonly end: string;
}

export function rowEnds(rows: readonly BlockRowView[]): RowEnds[] {
  return rows.flatMap((row): RowEnds[] => {
    const [first, last] = [row.pieces[0], row.pieces.at(-1)];
    return first && last ? [{ rowId: row.id, label: row.label, start: placeText(first.from), end: placeText(last.to) }] : [];
  });
}

/** Longitude and latitude as a walk is asked for. */
export const placeText = ([lon, lat]: readonly [number, number]) => `${lon.toFixed(7)},${lat.toFixed(7)}`;

/** The same as longitude and latitude. */
export function gatePlace(gate: string | null): [number, number] | null {
  if (gate === null) return null;
  const [lon, lat] = gate.split(',').map(Number);
  return lon === undefined || lat === undefined ? null : [lon, lat];
}
