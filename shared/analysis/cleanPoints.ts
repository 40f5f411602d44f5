/**
 * Points of a survey before they are spread over a grid. In: positions in metres and values. Out: the points kept, and how
 * many were set aside for which reason. Cost: one pass and a sort.
 */
import { spikes } from './pointSpikes.ts';
import type { ValuedPoints } from './resamplePoints.ts';

export type SetAsideReason = 'missing' | 'impossible' | 'samePlace' | 'spike';

export interface CleanedPoints {
  readonly kept: ValuedPoints;
  readonly setAside: readonly { readonly reason: SetAsideReason; readonly count: number }[];
}

/** Readings closer together than this were taken standing still (judgement; a sensor on the move is a metre further on). */
const samePlaceM = 0.05;

/**
 * Drops points without a value, with a value the layer cannot hold (a negative conductivity), repeats at one place, of
 * which the first stays, and spikes. Points (0,0) 12, (0,0) 13, (5,0) -3, (9,0) 14 leave 12 and 14.
 */
export function cleanPoints({ x, y, value }: ValuedPoints, { min, max }: { min: number | null; max: number | null }): CleanedPoints {
  const counts: Record<SetAsideReason, number> = { missing: 0, impossible: 0, samePlace: 0, spike: 0 };
  const taken = new Set<string>();
  const kept: number[] = [];
  for (let point = 0; point < x.length; point++) {
    const reason = reasonAgainst(value[point]!, { min, max }) ?? (isTaken(taken, x[point]!, y[point]!) ? 'samePlace' : null);
    if (reason === null) kept.push(point);
    else counts[reason] += 1;
  }
  const pick = (from: Float64Array, chosen: readonly number[]) => Float64Array.from(chosen, (point) => from[point]!);
  const isSpike = spikes({ x: pick(x, kept), y: pick(y, kept), value: pick(value, kept) });
  const calm = kept.filter((_, at) => isSpike[at] === 0);
  counts.spike = kept.length - calm.length;
  return { kept: { x: pick(x, calm), y: pick(y, calm), value: pick(value, calm) }, setAside: (Object.keys(counts) as SetAsideReason[]).map((reason) => ({ reason, count: counts[reason] })) };
}

function reasonAgainst(value: number, { min, max }: { min: number | null; max: number | null }): SetAsideReason | null {
  if (Number.isNaN(value)) return 'missing';
  return (min !== null && value < min) || (max !== null && value > max) ? 'impossible' : null;
}

function isTaken(taken: Set<string>, x: number, y: number): boolean {
  const place = `${Math.round(x / samePlaceM)} ${Math.round(y / samePlaceM)}`;
  if (taken.has(place)) return true;
  taken.add(place);
  return false;
}
