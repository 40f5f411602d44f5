/**
 * Zones of two maps paired by what they share, so that a zone that only got another number counts as the same. In: zone of each
 * vine in both maps, from 1. Out: pairs, and vines outside them. Cost: vines, plus the pairs that occur. The pair with most vines
 * goes first; for the few zones of a block this is the best pairing but for contrived ties.
 */

import { crossTable } from './agreement.ts';

export interface ZonePair {
  readonly from: number;
  readonly to: number;
  readonly vines: number;
}

export function pairZones(first: ArrayLike<number>, second: ArrayLike<number>): ZonePair[] {
  const { counts, columns } = crossTable(first, second);
  const shared = Array.from(counts, (vines, at) => ({ from: Math.floor(at / columns), to: at % columns, vines }))
    .filter(({ from, to, vines }) => from > 0 && to > 0 && vines > 0)
    .sort((a, b) => b.vines - a.vines || a.from - b.from || a.to - b.to);
  const pairs: ZonePair[] = [];
  for (const pair of shared) if (!pairs.some(({ from, to }) => from === pair.from || to === pair.to)) pairs.push(pair);
  return pairs;
}

/** Vines that are not in a zone paired with their own. vinesApart([1, 1, 2, 2], [2, 2, 1, 2]) is 1. */
export function vinesApart(first: ArrayLike<number>, second: ArrayLike<number>): number {
  return first.length - pairZones(first, second).reduce((sum, { vines }) => sum + vines, 0);
}

/** Whether a vine leaves its zone, when a zone that only got another number counts as the same; 0 is no zone. */
export function leavesZone(first: ArrayLike<number>, second: ArrayLike<number>): (vine: number) => boolean {
  const partner = new Map(pairZones(first, second).map(({ from, to }) => [from, to]));
  return (vine) => (first[vine]! === 0 ? second[vine]! !== 0 : partner.get(first[vine]!) !== second[vine]!);
}
