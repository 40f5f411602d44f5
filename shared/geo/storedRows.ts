import type { LonLat, MultiPolygonLonLat } from './coordinates.ts';
import { lineBearing, ringMiddle, toAlongAcross, type RowFrame } from './rowFrame.ts';
import type { BlockRows, RowPiece, VineRow } from './rows.ts';
import { convergenceDeg, fromUtm, toUtm } from './utm.ts';

/** A piece as it is stored and sent: degrees only, the metres follow from the block's UTM zone. */
export interface StoredPiece {
  readonly from: LonLat;
  readonly to: LonLat;
  readonly bends: readonly LonLat[];
  readonly lengthM: number;
  readonly firstVine: number;
  readonly vineCount: number;
  readonly firstVineM: number;
  readonly stepM: number;
}

export interface StoredRow {
  readonly ordinal: number;
  readonly pieces: readonly StoredPiece[];
  readonly vineCount: number;
}

/** What of a block decides the frame of its rows. */
export interface FrameFacts {
  readonly boundary: MultiPolygonLonLat;
  readonly rowBearingDeg: number;
  readonly epsg: number;
  readonly withoutRows?: boolean;
}

/** Rows as every calculation takes them, from rows as they are stored. Row i of the answer is row i of the input. */
export function rowsFromStored(facts: FrameFacts, stored: readonly StoredRow[]): BlockRows {
  const frame = blockRowFrame(facts);
  return { epsg: facts.epsg, frame, rows: stored.map((row) => rowFromStored(row, frame, facts.epsg)), warnings: [], ...(facts.withoutRows ? { withoutRows: true } : {}) };
}

/** The row frame of a block: origin at the outline's first vertex, bearing turned from true to grid north at its middle. */
function blockRowFrame({ boundary, rowBearingDeg, epsg }: FrameFacts): RowFrame {
  const ring = boundary[0]?.[0] ?? [];
  const convergence = convergenceDeg(ringMiddle(ring), epsg);
  return { originXY: toUtm(ring[0]!, epsg), gridBearingDeg: lineBearing(rowBearingDeg - convergence) };
}

/** The stored form of a built row's pieces. Nine decimals of a degree are a tenth of a millimetre. */
export function storedPieces(row: VineRow, epsg: number): StoredPiece[] {
  return row.pieces.map(({ from, to, bendsXY, lengthM, firstVine, vineCount, firstVineM, stepM }) => ({
    from: rounded(from), to: rounded(to), bends: bendsXY.map((bend) => rounded(fromUtm(bend, epsg))), lengthM, firstVine, vineCount, firstVineM, stepM,
  }));
}

function rowFromStored(row: StoredRow, frame: RowFrame, epsg: number): VineRow {
  const pieces = row.pieces.map((piece): RowPiece => ({
    ...piece,
    fromXY: toUtm(piece.from, epsg),
    toXY: toUtm(piece.to, epsg),
    bendsXY: piece.bends.map((bend) => toUtm(bend, epsg)),
  }));
  const length = pieces.reduce((sum, piece) => sum + piece.lengthM, 0);
  const s = pieces.reduce((sum, piece) => sum + (piece.lengthM * (toAlongAcross(frame, piece.fromXY).s + toAlongAcross(frame, piece.toXY).s)) / 2, 0) / length;
  return { ordinal: row.ordinal, s, pieces, vineCount: row.vineCount };
}

function rounded([lon, lat]: LonLat): LonLat {
  return [Math.round(lon * 1e9) / 1e9, Math.round(lat * 1e9) / 1e9];
}
