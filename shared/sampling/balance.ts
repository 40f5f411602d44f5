import type { Units } from './pivotal.ts';

/** How well a sample is spread over its units; both are 0 for a sample of everything. */
export interface Spread {
  /**
   * Mean of (v - 1)², v = sum of the inclusion probabilities of the units nearest to a sampled unit, ties split
   * (Stevens & Olsen 2004 as used by Grafström et al. 2012). 0 is best; a simple random sample of 12 of 60 vines has about 0.25.
   */
  readonly balance: number;
  /** Mean over all units of the squared distance to the nearest sampled unit, m². Sees what the balance cannot: samples in one row. */
  readonly meanSquaredDistanceM2: number;
}

const TIE_M2 = 1e-9;

/** Example: 4 × 4 units, p 0.25, sample (1,1)(3,1)(1,3)(3,3): balance 0.12890625. */
export function sampleSpread(units: Units, sample: readonly number[]): Spread {
  const shares = new Float64Array(sample.length);
  const squares = new Float64Array(sample.length);
  let total = 0;
  // Plain loops: some million pairs of a vine and a target.
  for (let unit = 0; unit < units.p.length; unit++) {
    const [x, y] = [units.x[unit]!, units.y[unit]!];
    let least = Infinity;
    for (let i = 0; i < sample.length; i++) {
      const [dx, dy] = [units.x[sample[i]!]! - x, units.y[sample[i]!]! - y];
      squares[i] = dx * dx + dy * dy;
      if (squares[i]! < least) least = squares[i]!;
    }
    const tied = least + TIE_M2 * (1 + least);
    let nearest = 0;
    for (let i = 0; i < sample.length; i++) if (squares[i]! <= tied) nearest += 1;
    for (let i = 0; i < sample.length; i++) if (squares[i]! <= tied) shares[i]! += units.p[unit]! / nearest;
    total += least;
  }
  const balance = shares.reduce((sum, share) => sum + (share - 1) ** 2, 0) / sample.length;
  return { balance, meanSquaredDistanceM2: total / units.p.length };
}

/** Targets that lie at least `apartM` from each other, counted greedily in draw order: in how many places one looks. */
export function placeCount(units: Pick<Units, 'x' | 'y'>, sample: readonly number[], apartM: number): number {
  const places: number[] = [];
  for (const unit of sample) {
    const isNew = places.every((place) => Math.hypot(units.x[place]! - units.x[unit]!, units.y[place]! - units.y[unit]!) >= apartM);
    if (isNew) places.push(unit);
  }
  return places.length;
}
