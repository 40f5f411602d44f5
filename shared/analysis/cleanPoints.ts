/**
 * Points of a survey before they are spread over a grid. In: positions in metres and values, in the order they were read.
 * Out: the points kept, and those set aside, each with one reason. A reason that is switched off sets nothing aside.
 * Cost: a few passes and a sort.
 */
import { oddSpeeds } from './pointSpeeds.ts';
import { spikes } from './pointSpikes.ts';
import type { ValuedPoints } from './resamplePoints.ts';

export const setAsideReasons = ['missing', 'impossible', 'outside', 'samePlace', 'speed', 'spike'] as const;
export type SetAsideReason = (typeof setAsideReasons)[number];

export interface CleanedPoints {
  readonly kept: ValuedPoints;
  readonly setAside: readonly { readonly reason: SetAsideReason; readonly count: number }[];
  /** Index of each point set aside among those given, with its reason. */
  readonly aside: readonly { readonly point: number; readonly reason: SetAsideReason }[];
}

export interface CleaningRules {
  readonly min: number | null;
  readonly max: number | null;
  /** Speed of each reading as its file gives it, in any unit. */
  readonly speed?: Float64Array | null;
  /** True for places that are no ground of the block: turning ground and roads at its edge. */
  readonly isOutside?: (x: number, y: number) => boolean;
  /** Reasons that a person took back. */
  readonly off?: readonly SetAsideReason[];
}

/** Readings closer together than this were taken standing still (judgement; a sensor on the move is a metre further on). */
const samePlaceM = 0.05;

/**
 * Drops points without a value, with a value the layer cannot hold (a negative conductivity), outside the block, repeats at
 * one place, of which the first stays, those read too slowly or too fast, and spikes.
 * Points (0,0) 12, (0,0) 13, (5,0) -3, (9,0) 14 leave 12 and 14.
 */
export function cleanPoints({ x, y, value }: ValuedPoints, rules: CleaningRules): CleanedPoints {
  const { speed = null, isOutside = () => false, off = [] } = rules;
  const reasons = new Array<SetAsideReason | null>(x.length).fill(null);
  const remaining = () => {
    const points: number[] = [];
    for (let point = 0; point < reasons.length; point++) if (reasons[point] === null) points.push(point);
    return points;
  };
  const pick = (from: Float64Array, points: readonly number[]) => Float64Array.from(points, (point) => from[point]!);
  const picked = (points: readonly number[]) => ({ x: pick(x, points), y: pick(y, points), value: pick(value, points) });
  const mark = (reason: SetAsideReason, is: (point: number) => boolean) => {
    if (!off.includes(reason)) for (const point of remaining()) if (is(point)) reasons[point] = reason;
  };
  const isTaken = placesTaken();
  // A point without a value can never be used, whatever a person wishes.
  for (const point of remaining()) if (Number.isNaN(value[point]!)) reasons[point] = 'missing';
  mark('impossible', (point) => (rules.min !== null && value[point]! < rules.min) || (rules.max !== null && value[point]! > rules.max));
  mark('outside', (point) => isOutside(x[point]!, y[point]!));
  mark('samePlace', (point) => isTaken(x[point]!, y[point]!));
  const moving = remaining();
  const odd = oddSpeeds(picked(moving), speed === null ? null : pick(speed, moving));
  const isOdd = new Set(moving.filter((_, at) => odd[at] === 1));
  mark('speed', (point) => isOdd.has(point));
  const calm = remaining();
  const spiky = spikes(picked(calm));
  const isSpike = new Set(calm.filter((_, at) => spiky[at] === 1));
  mark('spike', (point) => isSpike.has(point));
  const aside = reasons.flatMap((reason, point) => (reason === null ? [] : { point, reason }));
  return { kept: picked(remaining()), setAside: setAsideReasons.map((reason) => ({ reason, count: aside.filter((each) => each.reason === reason).length })), aside };
}

/** Tells of each place in turn whether one before it was the same. Steps of a place in UTM fit into one number: under 2 ** 28 of them north, 2 ** 25 east. */
function placesTaken(): (x: number, y: number) => boolean {
  const taken = new Set<number>();
  return (x, y) => {
    const place = Math.round(x / samePlaceM) * 2 ** 28 + Math.round(y / samePlaceM);
    if (taken.has(place)) return true;
    taken.add(place);
    return false;
  };
}
