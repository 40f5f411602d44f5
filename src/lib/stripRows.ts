import type { BlockRowView, BlockRowsView, VineState } from '../../shared/contracts/rows.ts';
import type { LonLat, MultiPolygonLonLat } from '../../shared/geo/coordinates.ts';
import { vineLabel, vineOrdinal } from '../../shared/geo/numbering.ts';
import { toAlongAcross } from '../../shared/geo/rowFrame.ts';
import type { BlockRows, VineRow } from '../../shared/geo/rows.ts';
import { rowsFromStored } from '../../shared/geo/storedRows.ts';
import { pointOnPiece, vineXY } from '../../shared/geo/vines.ts';
import { fromUtm } from '../../shared/geo/utm.ts';
import { isInside } from './mapPlaces.ts';

/** What the strip shows of a row: counted as people count, row 1 on top and vine 1 at the left. */
export interface CountedRow {
  readonly id: string;
  readonly label: string;
  readonly startOffsetM: number;
  readonly lengthM: number;
  readonly vineCount: number;
  readonly startPost: string | null;
  readonly endPost: string | null;
  readonly zoneRuns: readonly { readonly zone: number; readonly from: number; readonly to: number }[];
  readonly missing: readonly number[];
  readonly replant: readonly number[];
  readonly offType: readonly number[];
}

export interface StripBlock {
  readonly boundary: { readonly coordinates: unknown };
  readonly epsg: number;
  readonly rowBearingDeg: number;
  readonly startPostColour: string | null;
  readonly endPostColour: string | null;
  readonly withoutRows?: boolean;
}

export interface StripZoneArea {
  readonly number: number;
  readonly geometry: { readonly coordinates: number[][][][] };
}

/** Rows of a block in metres of its UTM zone, in the order in which they came. */
function laidRows(block: StripBlock, rows: Pick<BlockRowsView, 'items'>): BlockRows {
  return rowsFromStored({ boundary: block.boundary.coordinates as MultiPolygonLonLat, epsg: block.epsg, rowBearingDeg: block.rowBearingDeg }, rows.items);
}

/** Rows as a strip shows them. `zones`: areas in force, by which the vines are coloured. */
export function countedRows(block: StripBlock, rows: Pick<BlockRowsView, 'items' | 'numbering'>, zones: readonly StripZoneArea[] = []): CountedRow[] {
  const laid = laidRows(block, rows);
  const fromEnd = rows.numbering.vineOneEnd === 'end';
  const counted = rows.items.map((item, at): CountedRow => {
    const row = laid.rows[at]!;
    const ends = [toAlongAcross(laid.frame, row.pieces[0]!.fromXY).t, toAlongAcross(laid.frame, row.pieces.at(-1)!.toXY).t] as const;
    const marked = (...states: string[]) => item.vines.filter((vine) => !vine.proposed && states.includes(vine.state)).map((vine) => vineLabel(row, vine.ordinal, rows.numbering.vineOneEnd)).sort((a, b) => a - b);
    return {
      id: item.id,
      label: item.label,
      startOffsetM: fromEnd ? -ends[1] : ends[0],
      lengthM: ends[1] - ends[0],
      vineCount: row.vineCount,
      startPost: fromEnd ? block.endPostColour : block.startPostColour,
      endPost: fromEnd ? block.startPostColour : block.endPostColour,
      zoneRuns: zoneRuns(zonesOfVines(row, laid.epsg, zones), fromEnd),
      missing: marked('missing', 'dead'),
      replant: marked('replant'),
      offType: marked('offType', 'sick'),
    };
  });
  return rows.numbering.rowOneSide === 'high' ? counted.reverse() : counted;
}

/** The vine that people call number `label` of a row, by its permanent ordinal; null when there is none. */
export function ordinalOf(block: StripBlock, rows: Pick<BlockRowsView, 'items' | 'numbering'>, at: { rowId: string; label: number }): number | null {
  const item = rows.items.find((each) => each.id === at.rowId);
  if (!item) return null;
  return vineOrdinal(rowOf(block, item), at.label, rows.numbering.vineOneEnd);
}

/** What is noted of a vine, or null for a plain living one. */
export function noteOf(block: StripBlock, rows: Pick<BlockRowsView, 'items' | 'numbering'>, at: { rowId: string; label: number }): BlockRowView['vines'][number] | null {
  const ordinal = ordinalOf(block, rows, at);
  return rows.items.find((each) => each.id === at.rowId)?.vines.find((vine) => vine.ordinal === ordinal) ?? null;
}

function rowOf(block: StripBlock, item: BlockRowView): VineRow {
  return laidRows(block, { items: [item] }).rows[0]!;
}

/** Zone number of each vine from the start end, 0 outside every zone. */
function zonesOfVines(row: VineRow, epsg: number, zones: readonly StripZoneArea[]): number[] {
  if (zones.length === 0) return [];
  return row.pieces.flatMap((piece) =>
    Array.from({ length: piece.vineCount }, (_, k) => {
      const [lon, lat]: LonLat = fromUtm(pointOnPiece(piece, piece.firstVineM + k * piece.stepM), epsg);
      return zones.find((zone) => zone.geometry.coordinates.some((rings) => isInside(rings, lon, lat)))?.number ?? 0;
    }),
  );
}

function zoneRuns(zoneOfVine: readonly number[], fromEnd: boolean): { zone: number; from: number; to: number }[] {
  const inOrder = fromEnd ? [...zoneOfVine].reverse() : zoneOfVine;
  const runs: { zone: number; from: number; to: number }[] = [];
  inOrder.forEach((zone, at) => {
    const last = runs.at(-1);
    if (last && last.zone === zone) last.to = at + 1;
    else runs.push({ zone, from: at + 1, to: at + 1 });
  });
  return runs;
}

/** Where a vine stands, for blocks in which that is its name. */
function placeOf({ withoutRows, epsg }: StripBlock, row: VineRow, ordinal: number): LonLat | undefined {
  const xy = withoutRows ? vineXY(row, ordinal) : null;
  return xy === null ? undefined : fromUtm(xy, epsg);
}

/** A place of the strip as people name what stands there. */
export function namedPlace(block: StripBlock, rows: Pick<BlockRowsView, 'items' | 'numbering'>, at: { rowId: string; label: number }): { rowLabel: string; vineNumber: number; place?: LonLat | undefined } {
  const item = rows.items.find(({ id }) => id === at.rowId);
  const ordinal = ordinalOf(block, rows, at);
  return { rowLabel: item?.label ?? '', vineNumber: at.label, place: item && ordinal !== null ? placeOf(block, rowOf(block, item), ordinal) : undefined };
}

/** What the crew found at a place, as people count it. */
export interface ProposedVine {
  readonly rowId: string;
  readonly ordinal: number;
  readonly row: string;
  readonly vine: number;
  /** Given where vines stand without rows. */
  readonly place?: LonLat | undefined;
  readonly state: VineState;
  readonly noted?: { readonly by: string; readonly at: string };
}

/** Proposals of the crew that wait, row by row. */
export function proposedVines(block: StripBlock, rows: Pick<BlockRowsView, 'items' | 'numbering'>): ProposedVine[] {
  const laid = laidRows(block, rows).rows;
  return rows.items.flatMap(({ id, label, vines }, at) => {
    const row = laid[at];
    return row ? vines.filter(({ proposed }) => proposed).map(({ ordinal, state, noted }) => ({ rowId: id, ordinal, row: label, vine: vineLabel(row, ordinal, rows.numbering.vineOneEnd), place: placeOf(block, row, ordinal), state, ...(noted ? { noted } : {}) })) : [];
  });
}
