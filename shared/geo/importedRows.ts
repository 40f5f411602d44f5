import { AnalysisError } from '../analysis/analysisError.ts';
import type { LonLat, XY } from './coordinates.ts';
import { lineBearing, type RowFrame, toAlongAcross } from './rowFrame.ts';
import { type BlockRows, rowOnMap, type VineRow } from './rows.ts';
import type { PieceXY, RowWarning } from './rowsLayout.ts';
import { toUtm, utmEpsg } from './utm.ts';
import { type VineAlign, vinesOnPiece } from './vinesOnPiece.ts';

/** A surveyed row line, post to post; it may bend. */
export interface RowLine {
  readonly line: readonly LonLat[];
  readonly label?: string | null;
}

export interface ImportFacts {
  readonly vineSpacingM: number;
  /** Taken from the lines when left out. */
  readonly rowSpacingM?: number;
  readonly endOffsetM?: number;
  readonly vineAlign?: VineAlign;
  readonly epsg?: number;
}

export interface ImportedRows extends BlockRows {
  readonly rowSpacingM: number;
  /** Labels that came with the lines, by row index; null where none did. They are kept as labels. */
  readonly importedLabels: readonly (string | null)[];
}

/** A gap between neighbouring rows off the usual one by more than this is reported (judgement). */
const GAP_TOLERANCE = 0.3;
/** Files round positions, mostly to millimetres: a stretch of whole vines must not lose its last one to that (judgement). */
const ROUNDED_OFF_M = 0.02;

/**
 * Rows from surveyed lines. The bearing is the length-weighted mean direction (angles doubled, since a line has no
 * direction); s of a line is its length-weighted mean. Lines less than a quarter spacing apart that do not lie side by
 * side are pieces of one row. Own rule. Throws `AnalysisError` naming a line that has no length.
 */
export function importRows(lines: readonly RowLine[], facts: ImportFacts): ImportedRows {
  const first = lines[0]?.line[0];
  if (first === undefined) throw new AnalysisError('no-row-lines', 'The file holds no row lines; choose a file with one line for each row.');
  const epsg = facts.epsg ?? utmEpsg(first);
  const paths = lines.map(({ line }, i) => pathOfLine(line.map((point) => toUtm(point, epsg)), i + 1));
  const frame: RowFrame = { originXY: paths[0]![0]!, gridBearingDeg: meanBearing(paths) };
  const placed = paths.map((path, i) => placeLine(frame, path, lines[i]!.label ?? null)).sort((a, b) => a.s - b.s || a.fromT - b.fromT);
  const rowSpacingM = facts.rowSpacingM ?? usualGap(placed.map(({ s }) => s));
  const grouped = groupPieces(placed, rowSpacingM);
  const rows = grouped.map((group, i): VineRow => rowOnMap(rowOfGroup(group, i + 1, facts), epsg));
  return {
    epsg, frame, rows, rowSpacingM, warnings: unevenGaps(rows),
    importedLabels: grouped.map((group) => group.find(({ label }) => label !== null)?.label ?? null),
  };
}

interface PlacedLine {
  readonly path: readonly XY[];
  readonly label: string | null;
  readonly s: number;
  readonly fromT: number;
  readonly toT: number;
  readonly lengthM: number;
}

function pathOfLine(path: readonly XY[], lineNumber: number): readonly XY[] {
  if (path.length < 2 || !(pathLength(path) > 0)) {
    throw new AnalysisError('row-line-without-length', `Row line ${lineNumber} has no length; delete it or give it two different ends.`);
  }
  return path;
}

function pathLength(path: readonly XY[]): number {
  return path.slice(1).reduce((sum, point, i) => sum + Math.hypot(point[0] - path[i]![0], point[1] - path[i]![1]), 0);
}

function meanBearing(paths: readonly (readonly XY[])[]): number {
  let east = 0;
  let north = 0;
  for (const path of paths) {
    path.slice(1).forEach((point, i) => {
      const dx = point[0] - path[i]![0];
      const dy = point[1] - path[i]![1];
      const length = Math.hypot(dx, dy);
      if (length === 0) return;
      // sine and cosine of the doubled bearing, times the length
      east += (2 * dx * dy) / length;
      north += (dy * dy - dx * dx) / length;
    });
  }
  return lineBearing((Math.atan2(east, north) * 90) / Math.PI);
}

function placeLine(frame: RowFrame, path: readonly XY[], label: string | null): PlacedLine {
  const placed = path.map((point) => toAlongAcross(frame, point));
  const forward = placed.at(-1)!.t >= placed[0]!.t;
  let weighted = 0;
  placed.slice(1).forEach((to, i) => {
    const from = placed[i]!;
    weighted += (Math.hypot(to.s - from.s, to.t - from.t) * (from.s + to.s)) / 2;
  });
  const lengthM = pathLength(path);
  const ts = placed.map(({ t }) => t);
  return { path: forward ? path : [...path].reverse(), label, s: weighted / lengthM, fromT: Math.min(...ts), toT: Math.max(...ts), lengthM };
}

/** Median distance between neighbouring lines, those under half a metre (pieces of one row) left out. */
function usualGap(sortedS: readonly number[]): number {
  const gaps = sortedS.slice(1).map((s, i) => s - sortedS[i]!).filter((gap) => gap >= 0.5);
  return gaps.length === 0 ? 2 : median(gaps);
}

function groupPieces(placed: readonly PlacedLine[], rowSpacingM: number): PlacedLine[][] {
  const groups: PlacedLine[][] = [];
  for (const line of placed) {
    const home = groups.find((group) => group.every((piece) =>
      Math.abs(piece.s - line.s) < rowSpacingM / 4 && (line.fromT >= piece.toT || line.toT <= piece.fromT)));
    if (home === undefined) groups.push([line]);
    else home.push(line);
  }
  return groups.map((group) => group.sort((a, b) => a.fromT - b.fromT)).sort((a, b) => groupS(a) - groupS(b));
}

function groupS(group: readonly PlacedLine[]): number {
  const length = group.reduce((sum, line) => sum + line.lengthM, 0);
  return group.reduce((sum, line) => sum + line.s * line.lengthM, 0) / length;
}

function rowOfGroup(group: readonly PlacedLine[], ordinal: number, facts: ImportFacts) {
  let vineCount = 0;
  const spacing = { spacingM: facts.vineSpacingM, endOffsetM: facts.endOffsetM ?? facts.vineSpacingM / 2, align: facts.vineAlign ?? 'centred', slackM: ROUNDED_OFF_M };
  const pieces = group.map(({ path, lengthM }): PieceXY => {
    const spread = vinesOnPiece(lengthM, spacing);
    const firstVine = vineCount + 1;
    vineCount += spread.vineCount;
    return { fromXY: path[0]!, toXY: path.at(-1)!, bendsXY: path.slice(1, -1), lengthM, firstVine, ...spread };
  });
  return { ordinal, s: groupS(group), pieces, vineCount };
}

function unevenGaps(rows: readonly VineRow[]): RowWarning[] {
  const gaps = rows.slice(1).map((row, i) => row.s - rows[i]!.s);
  if (gaps.length === 0) return [];
  const usualM = median(gaps);
  return gaps.flatMap((gapM, i): RowWarning[] =>
    Math.abs(gapM - usualM) > GAP_TOLERANCE * usualM ? [{ code: 'unevenGap', row: i + 1, gapM, usualM }] : []);
}

function median(values: readonly number[]): number {
  const sorted = [...values].sort((a, b) => a - b);
  const middle = sorted.length >> 1;
  return sorted.length % 2 === 1 ? sorted[middle]! : (sorted[middle - 1]! + sorted[middle]!) / 2;
}
