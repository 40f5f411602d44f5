import { AnalysisError } from '../analysis/analysisError.ts';
import type { MultiPolygonXY, XY } from './coordinates.ts';
import { fromAlongAcross, type RowFrame } from './rowFrame.ts';
import {
  type Headland, type HeadlandKind, lineOffsets, type LineSpread, type Outline, outlineInFrame, type RowAlign, rowStretches, type Stretch,
} from './rowLines.ts';
import { countedVines, type VineAlign, vinesOnPiece, type VineSpread } from './vinesOnPiece.ts';

/** One unbroken piece of a row, from its start end (low t) to its far end. */
export interface PieceXY extends VineSpread {
  readonly fromXY: XY;
  readonly toXY: XY;
  /** Corners between the ends of a surveyed row that bends; empty when the piece is straight. */
  readonly bendsXY: readonly XY[];
  readonly lengthM: number;
  /** Ordinal of the piece's first vine; ordinals run on over the pieces of a row without a jump. */
  readonly firstVine: number;
}

export interface RowXY<Piece extends PieceXY = PieceXY> {
  /** 1, 2, 3 ... in order of s. Never shown: labels are made from it. */
  readonly ordinal: number;
  readonly s: number;
  readonly pieces: readonly Piece[];
  readonly vineCount: number;
}

export interface RowsXY<Piece extends PieceXY = PieceXY> {
  readonly frame: RowFrame;
  readonly rows: readonly RowXY<Piece>[];
  /** The lines only number the places of vines that stand without rows: people walk between them as they like. */
  readonly withoutRows?: boolean;
}

export type RowWarning =
  | { readonly code: 'noRows' }
  | { readonly code: 'rowSpacingImplied'; readonly typedM: number; readonly impliedM: number }
  | { readonly code: 'rowCountNotReached'; readonly typed: number; readonly laid: number }
  | { readonly code: 'vineSpacingImplied'; readonly row: number; readonly typedM: number; readonly impliedM: number }
  | { readonly code: 'unevenGap'; readonly row: number; readonly gapM: number; readonly usualM: number };

/** What is known of the planting. Optional facts have the trade's usual defaults. */
export interface PlantingFacts {
  readonly rowSpacingM: number;
  readonly vineSpacingM: number;
  /** Set-back of the vines from the outline at both row ends. */
  readonly headlandM: number;
  /** Set-back measured along the row (default) or square to the outline. */
  readonly headlandKind?: HeadlandKind;
  /** Distance of the outermost rows from the outline; default half a row spacing. */
  readonly edgeMarginM?: number;
  readonly align?: RowAlign;
  /** Distance from a row end to the first vine; default half a vine spacing. */
  readonly endOffsetM?: number;
  readonly vineAlign?: VineAlign;
  /** Pieces shorter than this carry no row; default 5 m. */
  readonly shortestRowM?: number;
  /** Rows counted in the field; overrides the row spacing. */
  readonly rowCount?: number | null;
  /** Vines counted in the field, by row ordinal; overrides the vine spacing there. */
  readonly vineCounts?: readonly { readonly row: number; readonly vineCount: number }[];
}

/** A counted number of rows or vines that moves the spacing by more than this is reported (judgement). */
const SPACING_TOLERANCE = 0.05;
const MOST_ROWS = 20_000;

/**
 * Rows and vines of an outline given in the metres of its frame. Rows without a piece get no number.
 * Throws `AnalysisError` when a spacing is not a positive number.
 */
export function layRows(boundaryXY: MultiPolygonXY, frame: RowFrame, facts: PlantingFacts): RowsXY & { warnings: RowWarning[] } {
  checkFacts(facts);
  const outline = outlineInFrame(boundaryXY, frame);
  const headland: Headland = {
    widthM: facts.headlandM, kind: facts.headlandKind ?? 'alongRow', shortestM: facts.shortestRowM ?? 5,
  };
  const { lines, warnings } = facts.rowCount === undefined || facts.rowCount === null
    ? { lines: linesThatFit(outline, facts, headland), warnings: [] }
    : countedLines(outline, { ...facts, rowCount: facts.rowCount }, headland);
  const counted = new Map((facts.vineCounts ?? []).map(({ row, vineCount }) => [row, vineCount]));
  const rows = lines.map((line, i) => rowOnLine(line, { ordinal: i + 1, frame, facts, counted: counted.get(i + 1) }));
  if (rows.length === 0) warnings.push({ code: 'noRows' });
  for (const row of rows) warnings.push(...impliedVineSpacing(row, facts, counted));
  return { frame, rows, warnings };
}

interface Line {
  readonly s: number;
  readonly stretches: readonly Stretch[];
}

function linesThatFit(outline: Outline, facts: PlantingFacts, headland: Headland): Line[] {
  return linesAt(outline, headland, {
    spacingM: facts.rowSpacingM, marginM: facts.edgeMarginM ?? facts.rowSpacingM / 2, align: facts.align ?? 'centred',
  });
}

function linesAt(outline: Outline, headland: Headland, spread: LineSpread): Line[] {
  const width = outline.maxS - outline.minS;
  if (width / spread.spacingM > MOST_ROWS) {
    throw new AnalysisError('bad-spacing', `A row spacing of ${spread.spacingM} m gives more than ${MOST_ROWS} rows over ${Math.round(width)} m; check its unit.`);
  }
  return lineOffsets(outline, spread)
    .map((s) => ({ s, stretches: rowStretches(outline, s, headland) }))
    .filter((line) => line.stretches.length > 0);
}

/**
 * Keeps the counted number and spreads it evenly over the width. Corners of the outline hold lines too short for a
 * row, so a few more lines than rows may be needed; the fewest that give the count are taken, else the nearest count.
 */
function countedLines(outline: Outline, facts: PlantingFacts & { rowCount: number }, headland: Headland): { lines: Line[]; warnings: RowWarning[] } {
  const width = outline.maxS - outline.minS;
  let best: { lines: Line[]; spacingM: number } | null = null;
  for (let drawn = facts.rowCount; drawn <= facts.rowCount + 20 + facts.rowCount / 4; drawn++) {
    const marginM = facts.edgeMarginM ?? width / drawn / 2;
    const spacingM = drawn === 1 ? facts.rowSpacingM : (width - 2 * marginM) / (drawn - 1);
    if (spacingM <= 0) break;
    const lines = linesAt(outline, headland, { spacingM, marginM: (width - (drawn - 1) * spacingM) / 2, align: 'centred' });
    const miss = Math.abs(lines.length - facts.rowCount);
    if (best === null || miss < Math.abs(best.lines.length - facts.rowCount)) best = { lines, spacingM };
    if (miss === 0) break;
  }
  if (best === null) return { lines: [], warnings: [{ code: 'rowCountNotReached', typed: facts.rowCount, laid: 0 }] };
  const warnings: RowWarning[] = [];
  if (best.lines.length !== facts.rowCount) warnings.push({ code: 'rowCountNotReached', typed: facts.rowCount, laid: best.lines.length });
  if (isOff(best.spacingM, facts.rowSpacingM)) warnings.push({ code: 'rowSpacingImplied', typedM: facts.rowSpacingM, impliedM: best.spacingM });
  return { lines: best.lines, warnings };
}

interface RowMaking {
  readonly ordinal: number;
  readonly frame: RowFrame;
  readonly facts: PlantingFacts;
  readonly counted: number | undefined;
}

function rowOnLine(line: Line, making: RowMaking): RowXY {
  const { frame, facts, counted } = making;
  const lengths = line.stretches.map(([from, to]) => to - from);
  const spacing = {
    spacingM: facts.vineSpacingM, endOffsetM: facts.endOffsetM ?? facts.vineSpacingM / 2, align: facts.vineAlign ?? 'centred',
  };
  const spreads = counted === undefined ? lengths.map((length) => vinesOnPiece(length, spacing)) : countedVines(lengths, counted);
  let vineCount = 0;
  const pieces = line.stretches.map(([from, to], i): PieceXY => {
    const spread = spreads[i]!;
    const firstVine = vineCount + 1;
    vineCount += spread.vineCount;
    return {
      fromXY: fromAlongAcross(frame, { s: line.s, t: from }),
      toXY: fromAlongAcross(frame, { s: line.s, t: to }),
      bendsXY: [], lengthM: to - from, firstVine, ...spread,
    };
  });
  return { ordinal: making.ordinal, s: line.s, pieces, vineCount };
}

function impliedVineSpacing(row: RowXY, facts: PlantingFacts, counted: ReadonlyMap<number, number>): RowWarning[] {
  if (!counted.has(row.ordinal) || row.vineCount === 0) return [];
  const impliedM = row.pieces.reduce((sum, piece) => sum + piece.lengthM, 0) / row.vineCount;
  if (!isOff(impliedM, facts.vineSpacingM)) return [];
  return [{ code: 'vineSpacingImplied', row: row.ordinal, typedM: facts.vineSpacingM, impliedM }];
}

function isOff(impliedM: number, typedM: number): boolean {
  return Math.abs(impliedM - typedM) > SPACING_TOLERANCE * typedM;
}

function checkFacts(facts: PlantingFacts): void {
  const positive = { 'Row spacing': facts.rowSpacingM, 'Vine spacing': facts.vineSpacingM };
  for (const [name, value] of Object.entries(positive)) {
    if (!(value > 0 && value < Infinity)) throw new AnalysisError('bad-spacing', `${name} is ${value} m; type a length above 0.`);
  }
  const notNegative = { 'Headland': facts.headlandM, 'End offset': facts.endOffsetM ?? 0, 'Edge margin': facts.edgeMarginM ?? 0, 'Shortest row': facts.shortestRowM ?? 0 };
  for (const [name, value] of Object.entries(notNegative)) {
    if (!(value >= 0 && value < Infinity)) throw new AnalysisError('bad-spacing', `${name} is ${value} m; type 0 or more.`);
  }
  const counts = [facts.rowCount ?? 1, ...(facts.vineCounts ?? []).map(({ vineCount }) => vineCount)];
  for (const count of counts) {
    if (!Number.isInteger(count) || count < 1 || count > MOST_ROWS) {
      throw new AnalysisError('bad-count', `A count of ${count} rows or vines cannot be used; type a whole number from 1 to ${MOST_ROWS}.`);
    }
  }
}
