/**
 * Cuts one piece of a row into runs of one zone each.
 * In: what each zone would cost at each vine. Out: a zone per vine, least cost + penalty × cuts with every run at
 * least `shortestRun` vines; ties: fewer cuts, then the smaller zone number from vine 1 on. Exact dynamic programme
 * (own derivation, checked against full enumeration), O(vines × zones²).
 */

/** Cost of giving vine v zone z, at [v * zoneCount + z - 1]; 0 is no cost. */
export interface ZoneCosts {
  readonly vineCount: number;
  readonly zoneCount: number;
  readonly cost: Float64Array;
}

export interface RunRule {
  /** Cost of one more run, in wrong vines. */
  readonly cutPenalty: number;
  /** In vines. A shorter piece becomes one run. */
  readonly shortestRun: number;
}

/** 1 for each zone that is not the vine's own label; a vine without label (0) costs nothing anywhere. */
export function wrongVineCosts(labels: ArrayLike<number>, zoneCount: number): ZoneCosts {
  const cost = new Float64Array(labels.length * zoneCount);
  for (let vine = 0; vine < labels.length; vine++) {
    const label = labels[vine]!;
    if (label === 0) continue;
    for (let zone = 1; zone <= zoneCount; zone++) if (zone !== label) cost[vine * zoneCount + zone - 1] = 1;
  }
  return { vineCount: labels.length, zoneCount, cost };
}

/** Best membership less the zone's membership, so that a doubtful vine is cheap to move. `membership` is laid out as the cost. */
export function membershipCosts(membership: ArrayLike<number>, zoneCount: number): ZoneCosts {
  const cost = new Float64Array(membership.length);
  const vineCount = membership.length / zoneCount;
  for (let vine = 0; vine < vineCount; vine++) {
    let best = -Infinity;
    for (let zone = 0; zone < zoneCount; zone++) best = Math.max(best, membership[vine * zoneCount + zone]!);
    for (let zone = 0; zone < zoneCount; zone++) cost[vine * zoneCount + zone] = best - membership[vine * zoneCount + zone]!;
  }
  return { vineCount, zoneCount, cost };
}

/** The one zone with the least cost over all vines, ties to the lower number. */
export function cheapestZone(costs: ZoneCosts): number {
  const totals = new Float64Array(costs.zoneCount);
  costs.cost.forEach((cost, at) => (totals[at % costs.zoneCount]! += cost));
  let zone = 0;
  for (let other = 1; other < costs.zoneCount; other++) if (totals[other]! < totals[zone]! - TIE) zone = other;
  return zone + 1;
}

const TIE = 1e-9;

/**
 * Zone of each vine of a piece. Labels 111211112221222222, penalty 2, shortest run 4: eight 1, then ten 2.
 *
 * From the last vine back, for each zone z:
 *   within[v][z]: best for vines v.. when a run of z may go on or end before v
 *   opening[v][z]: best for vines v.. when a run of z starts at v, and so holds at least `shortestRun` vines
 */
export function cutIntoRuns(costs: ZoneCosts, rule: RunRule): Uint8Array {
  const { vineCount, zoneCount } = costs;
  const shortest = Math.max(1, rule.shortestRun);
  if (vineCount < 2 * shortest) return new Uint8Array(vineCount).fill(cheapestZone(costs));
  const sums = runningSums(costs);
  const size = (vineCount + 1) * zoneCount;
  const within = { cost: new Float64Array(size), cuts: new Int32Array(size), next: new Uint8Array(size) };
  const opening = { cost: new Float64Array(size).fill(Infinity), cuts: new Int32Array(size) };
  for (let vine = vineCount - 1; vine >= 0; vine--) {
    const row = vine * zoneCount;
    if (vine <= vineCount - shortest) {
      const after = (vine + shortest) * zoneCount;
      for (let zone = 0; zone < zoneCount; zone++) {
        opening.cost[row + zone] = sums[after + zone]! - sums[row + zone]! + within.cost[after + zone]!;
        opening.cuts[row + zone] = within.cuts[after + zone]!;
      }
    }
    for (let zone = 0; zone < zoneCount; zone++) {
      let cost = costs.cost[row + zone]! + within.cost[row + zoneCount + zone]!;
      let cuts = within.cuts[row + zoneCount + zone]!;
      let next = zone;
      for (let other = 0; other < zoneCount; other++) {
        if (other === zone) continue;
        const otherCost = opening.cost[row + other]! + rule.cutPenalty;
        const otherCuts = opening.cuts[row + other]! + 1;
        if (isBetter({ cost: otherCost, cuts: otherCuts, zone: other }, { cost, cuts, zone: next })) [cost, cuts, next] = [otherCost, otherCuts, other];
      }
      within.cost[row + zone] = cost;
      within.cuts[row + zone] = cuts;
      within.next[row + zone] = next;
    }
  }
  return readRuns(costs, { opening, next: within.next, shortest });
}

interface Choice {
  readonly cost: number;
  readonly cuts: number;
  readonly zone: number;
}

function isBetter(a: Choice, b: Choice): boolean {
  if (Math.abs(a.cost - b.cost) > TIE) return a.cost < b.cost;
  return a.cuts !== b.cuts ? a.cuts < b.cuts : a.zone < b.zone;
}

function readRuns(costs: ZoneCosts, tables: { opening: { cost: Float64Array; cuts: Int32Array }; next: Uint8Array; shortest: number }): Uint8Array {
  const { vineCount, zoneCount } = costs;
  const choice = (zone: number): Choice => ({ cost: tables.opening.cost[zone]!, cuts: tables.opening.cuts[zone]!, zone });
  let zone = 0;
  for (let other = 1; other < zoneCount; other++) if (isBetter(choice(other), choice(zone))) zone = other;
  const labels = new Uint8Array(vineCount);
  let heldUntil = tables.shortest;
  for (let vine = 0; vine < vineCount; vine++) {
    if (vine >= heldUntil) {
      const next = tables.next[vine * zoneCount + zone]!;
      if (next !== zone) heldUntil = vine + tables.shortest;
      zone = next;
    }
    labels[vine] = zone + 1;
  }
  return labels;
}

function runningSums({ vineCount, zoneCount, cost }: ZoneCosts): Float64Array {
  const sums = new Float64Array((vineCount + 1) * zoneCount);
  for (let at = 0; at < cost.length; at++) sums[at + zoneCount] = sums[at]! + cost[at]!;
  return sums;
}
