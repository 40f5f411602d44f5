import { AnalysisError } from '../analysis/analysisError.ts';
import type { XY } from '../geo/coordinates.ts';
import { toAlongAcross } from '../geo/rowFrame.ts';
import { vineXY } from '../geo/vines.ts';
import type { Walk, WalkStep, WalkStop } from './walk.ts';
import type { BlockWalkRequest } from './walkBlock.ts';
import { openOrder } from './walkOpen.ts';
import type { SheetLine } from './walkSheet.ts';
import { secondsAlong } from './walkTime.ts';

/** The walk past the chosen vines of a block without rows: straight from one to the next. Its cost is in seconds. */
export function walkBetween({ rows, vines, gateXY, end = 'gate', ground = {} }: Pick<BlockWalkRequest, 'rows' | 'vines' | 'gateXY' | 'end' | 'ground'>, chosen: readonly number[]): { readonly walk: Walk; readonly pathXY: readonly XY[] } {
  const places = chosen.map((vine) => placeOf(rows, vines[vine]!));
  const endXY = end === 'anywhere' ? null : end === 'gate' ? gateXY : end;
  const order = openOrder(places, gateXY, endXY);
  const pathXY = order.length === 0 ? [gateXY] : [gateXY, ...order.map((place) => places[place]!), ...(endXY === null ? [] : [endXY])];
  const node = (xy: XY) => ({ alley: 0, ...toAlongAcross(rows.frame, xy) });
  const stops: WalkStop[] = [];
  let [lengthM, cost] = [0, 0];
  const steps = pathXY.slice(1).map((toXY, i): WalkStep => {
    const fromXY = pathXY[i]!;
    const stepM = Math.hypot(toXY[0] - fromXY[0], toXY[1] - fromXY[1]);
    lengthM += stepM;
    cost += secondsAlong({ fromXY, toXY, lengthM: stepM }, ground);
    if (i < order.length) stops.push({ target: chosen[order[i]!]!, alley: 0, afterStep: i + 1, distanceM: lengthM });
    return { from: node(fromXY), to: node(toXY), lengthM: stepM, kind: 'crossing' };
  });
  return { walk: { lengthM, cost, steps, stops }, pathXY };
}

/** The sheet of such a walk: nothing is entered by a post or counted along a row. */
export function sheetBetween({ stops }: Walk, vines: BlockWalkRequest['vines'], zoneOf: ((vine: number) => number) | undefined): SheetLine[] {
  const zonesSeen = new Set<number>();
  return stops.map(({ target, alley, distanceM }, i): SheetLine => {
    const zone = zoneOf?.(target);
    const opensZone = zone !== undefined && !zonesSeen.has(zone);
    if (zone !== undefined) zonesSeen.add(zone);
    return { number: i + 1, target, ...vines[target]!, alley, enterBy: 'inside', heading: 'toEnd', ahead: 0, aheadFrom: 'entry', opensZone, distanceM };
  });
}

function placeOf({ rows }: BlockWalkRequest['rows'], { rowIndex, ordinal }: BlockWalkRequest['vines'][number]): XY {
  const row = rows[rowIndex];
  const place = row === undefined ? null : vineXY(row, ordinal);
  if (place === null) throw new AnalysisError('no-such-vine', `The block has no vine ${ordinal} in line ${rowIndex + 1} (by position); draw the targets again.`);
  return place;
}
