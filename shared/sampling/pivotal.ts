import type { Random } from '../analysis/random.ts';
import { NearestPoints } from '../geo/vinesNearest.ts';

/**
 * Local pivotal method 2 (Grafström, Lundström & Schelin 2012, Biometrics 68:514): a random sample with given inclusion
 * probabilities that is spread over the ground, because near units push each other out.
 * In: positions, inclusion probabilities, a stream of uniform numbers. Out: chosen units, ascending.
 * The stream is used in a fixed way: while more than one unit is undecided, one draw picks a unit among them in ascending
 * order, its nearest undecided unit (ties: lowest index) is its rival, a second draw decides; a last undecided unit takes
 * one draw. Nearest by buckets, the k-th undecided unit by a counting tree: 5 000 units take some 20 ms.
 */
export interface Units {
  readonly x: ArrayLike<number>;
  readonly y: ArrayLike<number>;
  /** Inclusion probability of each unit; their sum is the expected sample size. */
  readonly p: ArrayLike<number>;
}

/** Nearer than this to 0 or 1, a unit is decided. */
const DECIDED = 1e-9;

/** Example: units at 0 1 2 4 7 on a line, p .2 .5 .8 .6 .9, stream .24 .54 .37 .60 .63 .07 .01 .84 gives 2, 3, 4. */
export function localPivotal(units: Units, random: Random): number[] {
  const p = Float64Array.from(units.p);
  const near = new NearestPoints(units.x, units.y);
  const live = new LiveUnits(p.length);
  const settle = (unit: number): void => {
    if (p[unit]! > DECIDED && p[unit]! < 1 - DECIDED) return;
    near.remove(unit);
    live.remove(unit);
  };
  for (let unit = 0; unit < p.length; unit++) settle(unit);
  while (live.count > 1) {
    const unit = live.at(Math.floor(random() * live.count));
    const rival = near.nearest(units.x[unit]!, units.y[unit]!, unit);
    [p[unit], p[rival]] = contest(p[unit]!, p[rival]!, random());
    settle(unit);
    settle(rival);
  }
  if (live.count === 1) {
    const last = live.at(0);
    p[last] = random() < p[last]! ? 1 : 0;
  }
  return Array.from(p.keys()).filter((unit) => p[unit]! > 0.5);
}

/** One of two units is decided; the expectation of both stays what it was. */
function contest(pUnit: number, pRival: number, draw: number): [unit: number, rival: number] {
  const sum = pUnit + pRival;
  if (sum < 1 - DECIDED) return draw < pRival / sum ? [0, sum] : [sum, 0];
  return draw < (1 - pRival) / (2 - sum) ? [1, sum - 1] : [sum - 1, 1];
}

/** Undecided units in ascending order: the k-th one and removal in log n, by a binary indexed tree (Fenwick 1994). */
class LiveUnits {
  count: number;
  private readonly tree: Int32Array;
  private readonly present: Uint8Array;
  private readonly topStep: number;

  constructor(size: number) {
    this.count = size;
    this.present = new Uint8Array(size).fill(1);
    this.tree = Int32Array.from({ length: size + 1 }, (_, i) => i & -i);
    this.topStep = size === 0 ? 0 : 2 ** Math.floor(Math.log2(size));
  }

  remove(unit: number): void {
    if (this.present[unit] === 0) return;
    this.present[unit] = 0;
    this.count -= 1;
    for (let i = unit + 1; i < this.tree.length; i += i & -i) this.tree[i]! -= 1;
  }

  at(place: number): number {
    let unit = 0;
    let left = place;
    for (let step = this.topStep; step > 0; step >>= 1) {
      if (unit + step < this.tree.length && this.tree[unit + step]! <= left) {
        unit += step;
        left -= this.tree[unit]!;
      }
    }
    return unit;
  }
}
