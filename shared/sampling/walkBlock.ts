import { AnalysisError } from '../analysis/analysisError.ts';
import type { XY } from '../geo/coordinates.ts';
import { fromAlongAcross, type RowFrame } from '../geo/rowFrame.ts';
import type { RowsXY } from '../geo/rowsLayout.ts';
import { firstOrdinal, vinesAlong } from '../geo/vines.ts';
import { type Split, splitWalk } from './splitWalk.ts';
import { shortestWalk, type Walk, type WalkRequest } from './walk.ts';
import { type AlleyOptions, alleysOfRows, type BlockAlleys, type VineToVisit, walkTargetOf } from './walkAlleys.ts';
import type { AlleyLayout, WalkEdge, WalkNode, WalkPlace } from './walkLayout.ts';
import { placeOfGate } from './walkPlaces.ts';
import { sheetBetween, walkBetween } from './walkBetween.ts';
import { type SheetInput, sheetLines, type SheetLine } from './walkSheet.ts';
import { type PacedGround, secondsAlong, walkTime } from './walkTime.ts';

/** A walk through a block's rows. */
export interface BlockWalkRequest {
  readonly rows: RowsXY;
  readonly vines: readonly VineToVisit[];
  readonly gateXY: XY;
  /** Back to the gate (default), to another gate, or ending at the last vine. */
  readonly end?: XY | 'gate' | 'anywhere';
  /** Where somebody takes over: at this vine, standing in one of the alleys beside it. */
  readonly from?: { readonly rowIndex: number; readonly ordinal: number; readonly alley: number };
  readonly alleys?: AlleyOptions;
  readonly ground?: PacedGround;
}

export interface BlockWalk {
  /** Stops name vines by their index in the request; the walk's cost is in seconds. */
  readonly walk: Walk;
  /** The way on the map, in UTM metres. */
  readonly pathXY: readonly XY[];
  readonly layout: AlleyLayout;
  /** See `BlockAlleys`. */
  readonly assumedOpen: boolean;
}

/** The quickest walk past the vines, by the same way whether up or down a slope: seconds are those of both directions. */
export function walkBlock(request: BlockWalkRequest): BlockWalk {
  const alleys = alleysOfRows(request.rows, request.alleys);
  return walkVines(request, alleys, request.vines.map((_, i) => i));
}

export interface SharedWalk extends Split {
  /** Of each person, in the order of the runs. */
  readonly walks: readonly BlockWalk[];
}

/**
 * The vines shared among people who all begin and end at the gate; loads are seconds of walking and at the vines.
 * Stops keep the indexes of the request.
 */
export function shareBlockWalk(request: BlockWalkRequest, team: { readonly people: number; readonly serviceSOf: (vine: number) => number }): SharedWalk {
  const alleys = alleysOfRows(request.rows, request.alleys);
  const order = inRowOrder(request.vines);
  const loadOf = (from: number, to: number): number => {
    const { walk } = walkVines(request, alleys, order.slice(from, to));
    return walkTime(walk, team.serviceSOf).totalS;
  };
  const split = splitWalk({ targetCount: order.length, people: team.people, loadOf });
  const bounds = [0, ...split.cuts, order.length];
  return { ...split, walks: bounds.slice(1).map((to, i) => walkVines(request, alleys, order.slice(bounds[i]!, to))) };
}

/** The crew sheet of a walk in a block, with the zone of each vine of the request where bags are made by zone. */
export function sheetOfBlock({ rows, vines }: Pick<BlockWalkRequest, 'rows' | 'vines'>, { walk, layout }: BlockWalk, zoneOf?: (vine: number) => number): SheetLine[] {
  if (rows.withoutRows) return sheetBetween(walk, vines, zoneOf);
  const known = new Map<number, ReturnType<SheetInput['vinesOfRow']>>();
  const vinesOfRow: SheetInput['vinesOfRow'] = (rowIndex) => {
    const row = rows.rows[rowIndex]!;
    const found = known.get(rowIndex) ?? { firstOrdinal: firstOrdinal(row), alongT: vinesAlong(rows.frame, row) };
    known.set(rowIndex, found);
    return found;
  };
  const targets = vines.map((vine, i) => (zoneOf === undefined ? vine : { ...vine, zone: zoneOf(i) }));
  return sheetLines({ walk, alleys: layout.alleys, targets, vinesOfRow });
}

function inRowOrder(vines: readonly VineToVisit[]): number[] {
  return [...vines.keys()].sort((a, b) => vines[a]!.rowIndex - vines[b]!.rowIndex || vines[a]!.ordinal - vines[b]!.ordinal || a - b);
}

function walkVines(request: BlockWalkRequest, { layout, assumedOpen }: BlockAlleys, chosen: readonly number[]): BlockWalk {
  const { rows, gateXY, end = 'gate', ground = {} } = request;
  if (rows.withoutRows) return { ...walkBetween(request, chosen), layout, assumedOpen };
  const order = inRowOrder(chosen.map((vine) => request.vines[vine]!)).map((place) => chosen[place]!);
  const gate = placeOfGate(layout, rows.frame, gateXY);
  const start = request.from === undefined ? gate : placeAtVine(request, request.from);
  const goal = end === 'anywhere' ? 'anywhere' : end !== 'gate' ? placeOfGate(layout, rows.frame, end) : start === gate ? 'start' : gate;
  const walk = shortestWalk({
    layout, start, end: goal,
    targets: order.map((vine) => targetNamed(request, vine)),
    costOf: secondsOf(rows.frame, ground),
  });
  return {
    walk: { ...walk, stops: walk.stops.map((stop) => ({ ...stop, target: order[stop.target]! })) },
    pathXY: pathOf(rows.frame, walk), layout, assumedOpen,
  };
}

function targetNamed({ rows, vines, alleys }: BlockWalkRequest, vine: number) {
  const { rowIndex, ordinal } = vines[vine]!;
  const target = walkTargetOf(rows, vines[vine]!, alleys);
  if (Number.isNaN(target.t)) throw new AnalysisError('no-such-vine', `The block has no vine ${ordinal} in row ${rowIndex + 1} (by position); draw the targets again.`);
  if (target.alleys.length === 0) throw new AnalysisError('walk-unreachable', `Vine ${ordinal} in row ${rowIndex + 1} (by position) lies between shut alleys; open one or leave the vine out.`);
  return target;
}

function placeAtVine({ rows, alleys }: BlockWalkRequest, from: NonNullable<BlockWalkRequest['from']>): WalkPlace {
  return { at: 'alley', alley: from.alley, t: walkTargetOf(rows, from, { ...alleys, shutAlleys: [], outerAlleys: true }).t };
}

function secondsOf(frame: RowFrame, ground: PacedGround): NonNullable<WalkRequest['costOf']> {
  return (edge: WalkEdge, from: WalkNode, to: WalkNode) =>
    secondsAlong({ fromXY: fromAlongAcross(frame, from), toXY: fromAlongAcross(frame, to), lengthM: edge.lengthM }, ground);
}

function pathOf(frame: RowFrame, walk: Walk): XY[] {
  const nodes = walk.steps.length === 0 ? [] : [walk.steps[0]!.from, ...walk.steps.map(({ to }) => to)];
  return nodes
    .filter((node, i) => i === 0 || node.s !== nodes[i - 1]!.s || node.t !== nodes[i - 1]!.t)
    .map((node) => fromAlongAcross(frame, node));
}
