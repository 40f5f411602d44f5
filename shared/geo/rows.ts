import { AnalysisError } from '../analysis/analysisError.ts';
import type { LonLat, MultiPolygonLonLat } from './coordinates.ts';
import { polygonsCentroid } from './rings.ts';
import { lineBearing, ringMiddle, type RowFrame } from './rowFrame.ts';
import { layRows, type PieceXY, type PlantingFacts, type RowsXY, type RowWarning, type RowXY } from './rowsLayout.ts';
import { convergenceDeg, fromUtm, polygonsToUtm, utmEpsg } from './utm.ts';

/** A piece of a row with its end posts on the map. */
export interface RowPiece extends PieceXY {
  readonly from: LonLat;
  readonly to: LonLat;
}

export type VineRow = RowXY<RowPiece>;

/** All rows of a block in order of s; metres are those of UTM zone `epsg`. */
export interface BlockRows extends RowsXY<RowPiece> {
  readonly epsg: number;
  readonly warnings: readonly RowWarning[];
}

export interface RowFacts extends PlantingFacts {
  readonly bearingDeg: number;
  /** Measured from true north (a map, a compass corrected for declination) or from the UTM grid. */
  readonly bearingKind: 'true' | 'grid';
  /** The property's UTM zone; the block's own when left out. */
  readonly epsg?: number;
}

/**
 * Rows and vines of a block from its outline and the facts of its planting. The first vertex of the outline is the
 * origin of the row frame; a true bearing is turned by the meridian convergence at the middle of the outline's vertices.
 * UTM metres are used as metres (scale within 0.04 % in the middle of a zone).
 * Throws `AnalysisError` for a bearing or spacing that is not a usable number.
 */
export function buildRows(boundary: MultiPolygonLonLat, facts: RowFacts): BlockRows {
  const ring = boundary[0]?.[0];
  if (ring === undefined || ring.length < 3) throw new AnalysisError('no-outline', 'The block has no outline; draw or upload it before building rows.');
  if (!Number.isFinite(facts.bearingDeg)) throw new AnalysisError('bad-bearing', `Row bearing is ${facts.bearingDeg}; type degrees from 0 to 360.`);
  const epsg = facts.epsg ?? utmEpsg(polygonsCentroid(boundary));
  const boundaryXY = polygonsToUtm(boundary, epsg);
  const frame: RowFrame = { originXY: boundaryXY[0]![0]![0]!, gridBearingDeg: gridBearing(facts, ringMiddle(ring), epsg) };
  const { rows, warnings } = layRows(boundaryXY, frame, facts);
  return { epsg, frame, rows: rows.map((row) => rowOnMap(row, epsg)), warnings };
}

/** A row with its end posts in longitude and latitude. */
export function rowOnMap(row: RowXY, epsg: number): VineRow {
  return { ...row, pieces: row.pieces.map((piece) => ({ ...piece, from: fromUtm(piece.fromXY, epsg), to: fromUtm(piece.toXY, epsg) })) };
}

/** Grid bearing in [0, 180): true bearing less the meridian convergence, which is positive where grid north lies east. */
function gridBearing(facts: RowFacts, at: LonLat, epsg: number): number {
  return lineBearing(facts.bearingKind === 'grid' ? facts.bearingDeg : facts.bearingDeg - convergenceDeg(at, epsg));
}
