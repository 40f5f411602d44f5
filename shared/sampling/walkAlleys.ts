import { AnalysisError } from '../analysis/analysisError.ts';
import type { XY } from '../geo/coordinates.ts';
import { type RowFrame, toAlongAcross } from '../geo/rowFrame.ts';
import type { PieceXY, RowsXY, RowXY } from '../geo/rowsLayout.ts';
import { vineXY } from '../geo/vines.ts';
import type { AlleySide } from './rowSide.ts';
import type { Alley, AlleyGap, AlleyLayout, WalkTarget } from './walkLayout.ts';

/**
 * The alleys of a block's rows: alley r lies on the low-s side of row index r, alley r + 1 on its high-s side, so N rows
 * have N + 1 alleys, the outermost ones outside the block's edge rows. An alley reaches as far as its longer neighbour.
 * Where both neighbours are interrupted (a notch, a hole) it is broken; the inner ends of rows are ways through.
 */
export interface AlleyOptions {
  /** Whether one can walk outside the edge rows; default true. */
  readonly outerAlleys?: boolean;
  /** Listed ways through a row, at the place of a vine (a missing one, or 12.5 for between vines 12 and 13). */
  readonly gaps?: readonly { readonly rowIndex: number; readonly ordinal: number }[];
  /** Row ends that cannot be walked round. */
  readonly shutEnds?: readonly { readonly rowIndex: number; readonly end: 'start' | 'end' }[];
  /** Alleys that must not be entered, for example beside sprayed rows. */
  readonly shutAlleys?: readonly number[];
}

export interface BlockAlleys {
  readonly layout: AlleyLayout;
  /** True when parts of the block were not connected otherwise, so that breaks are taken as open ground: check on the spot. */
  readonly assumedOpen: boolean;
}

export function alleysOfRows({ frame, rows }: RowsXY, options: AlleyOptions = {}): BlockAlleys {
  if (rows.length === 0) throw new AnalysisError('no-rows', 'The block has no rows; build its rows before planning a walk.');
  const shut = shutAlleysOf(rows.length, options);
  const placed = rows.map((row) => stretchesOf(frame, row));
  const whole = Array.from({ length: rows.length + 1 }, (_, j) => alleyBetween(rows, placed, j));
  const inner = placed.flatMap((pieces, row) => innerEnds(pieces).map((t): AlleyGap => ({ alley: row, t, lengthM: whole[row + 1]!.s - whole[row]!.s })));
  const assumedOpen = !isConnected(whole, inner);
  const alleys = whole.map((alley, j): Alley => {
    if (shut.has(j)) return { ...alley, breaks: [[alley.bottomT, alley.topT]] };
    return assumedOpen ? { ...alley, breaks: [] } : alley;
  });
  const listed = (options.gaps ?? []).map(({ rowIndex, ordinal }): AlleyGap => ({
    alley: rowIndex, t: alongAtOrdinal(frame, rows[rowIndex]!, ordinal), lengthM: whole[rowIndex + 1]!.s - whole[rowIndex]!.s,
  }));
  const isShutEnd = (row: number, end: 'start' | 'end'): boolean =>
    (options.shutEnds ?? []).some((shutEnd) => shutEnd.rowIndex === row && shutEnd.end === end);
  const step = (row: number, end: 'start' | 'end'): number | null => {
    if (isShutEnd(row, end)) return null;
    const [here, next] = [whole[row]!, whole[row + 1]!];
    const rise = end === 'start' ? next.bottomT - here.bottomT : next.topT - here.topT;
    return Math.hypot(next.s - here.s, rise);
  };
  const layout: AlleyLayout = {
    alleys, gaps: [...inner, ...listed],
    bottomM: rows.map((_, row) => step(row, 'start')),
    topM: rows.map((_, row) => step(row, 'end')),
  };
  return { layout, assumedOpen };
}

export interface VineToVisit {
  readonly rowIndex: number;
  readonly ordinal: number;
  /** The face of the canopy that the measure needs; either by default. */
  readonly side?: AlleySide;
}

/** The alleys from which a vine can be served, shut ones left out, and its place along them: NaN when there is no such vine. */
export function walkTargetOf({ frame, rows }: RowsXY, vine: VineToVisit, options: AlleyOptions = {}): WalkTarget {
  const beside = { either: [vine.rowIndex, vine.rowIndex + 1], low: [vine.rowIndex], high: [vine.rowIndex + 1] }[vine.side ?? 'either'];
  const shut = shutAlleysOf(rows.length, options);
  const row = rows[vine.rowIndex];
  const xy = row === undefined ? null : vineXY(row, vine.ordinal);
  return { alleys: xy === null ? [] : beside.filter((alley) => !shut.has(alley)), t: xy === null ? Number.NaN : toAlongAcross(frame, xy).t };
}

function shutAlleysOf(rowCount: number, { outerAlleys = true, shutAlleys = [] }: AlleyOptions): ReadonlySet<number> {
  const outer = outerAlleys || rowCount < 2 ? [] : [0, rowCount];
  return new Set([...shutAlleys, ...outer]);
}

type Stretch = readonly [fromT: number, toT: number];

function stretchesOf(frame: RowFrame, row: RowXY): Stretch[] {
  return row.pieces.map((piece): Stretch => {
    const ts = [piece.fromXY, ...piece.bendsXY, piece.toXY].map((xy) => alongOf(frame, xy));
    return [Math.min(...ts), Math.max(...ts)];
  });
}

function alongOf(frame: RowFrame, xy: XY): number {
  return toAlongAcross(frame, xy).t;
}

function innerEnds(pieces: readonly Stretch[]): number[] {
  return pieces.slice(1).flatMap(([fromT], i) => [pieces[i]![1], fromT]);
}

function alleyBetween(rows: readonly RowXY[], placed: readonly (readonly Stretch[])[], j: number): Alley {
  const beside = [...(placed[j - 1] ?? []), ...(placed[j] ?? [])].sort((a, b) => a[0] - b[0]);
  const breaks: Stretch[] = [];
  let reach = beside[0]![1];
  for (const [from, to] of beside.slice(1)) {
    if (from > reach) breaks.push([reach, from]);
    reach = Math.max(reach, to);
  }
  return { s: alleyMiddle(rows, j), bottomT: beside[0]![0], topT: reach, breaks };
}

/** Half-way between the neighbours; outside the edge rows, half the neighbouring spacing away. */
function alleyMiddle(rows: readonly RowXY[], j: number): number {
  const [low, high] = [rows[j - 1], rows[j]];
  if (low !== undefined && high !== undefined) return (low.s + high.s) / 2;
  const usual = rows.length > 1 ? (low === undefined ? rows[1]!.s - rows[0]!.s : rows.at(-1)!.s - rows.at(-2)!.s) : 2;
  return low === undefined ? high!.s - usual / 2 : low.s + usual / 2;
}

/** Whether all parts of the alleys hang together by headlands and inner row ends; parts are told apart by the breaks. */
function isConnected(alleys: readonly Alley[], inner: readonly AlleyGap[]): boolean {
  const partStart: number[] = [];
  let parts = 0;
  for (const alley of alleys) {
    partStart.push(parts);
    parts += 1 + (alley.breaks ?? []).length;
  }
  const partOf = (j: number, t: number): number => partStart[j]! + (alleys[j]!.breaks ?? []).filter(([, to]) => t >= to).length;
  const root = Array.from({ length: parts }, (_, part) => part);
  const find = (part: number): number => (root[part] === part ? part : (root[part] = find(root[part]!)));
  const join = (a: number, b: number): void => {
    root[find(a)] = find(b);
  };
  for (let j = 0; j + 1 < alleys.length; j++) {
    join(partOf(j, alleys[j]!.bottomT), partOf(j + 1, alleys[j + 1]!.bottomT));
    join(partOf(j, alleys[j]!.topT), partOf(j + 1, alleys[j + 1]!.topT));
  }
  for (const { alley, t } of inner) join(partOf(alley, t), partOf(alley + 1, t));
  return root.every((part) => find(part) === find(0));
}

/** t of a place in a row, counted in vines and parts of them from the row's start end. */
function alongAtOrdinal(frame: RowFrame, row: RowXY, ordinal: number): number {
  const isOn = (piece: PieceXY): boolean => ordinal < piece.firstVine + piece.vineCount;
  const piece = row.pieces.find(isOn) ?? row.pieces.at(-1)!;
  const share = (piece.firstVineM + (ordinal - piece.firstVine) * piece.stepM) / piece.lengthM;
  const [from, to] = [alongOf(frame, piece.fromXY), alongOf(frame, piece.toXY)];
  return from + Math.min(1, Math.max(0, share)) * (to - from);
}
