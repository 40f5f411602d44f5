import type { PlanView } from '../../../shared/contracts/plans.ts';
import { studentTUpperQuantile } from '../../../shared/sampling/quantiles.ts';
import type { SamplingDesk } from './samplingDesk.ts';

/** Values that a crew brings back, by target. */
export interface Brought {
  readonly values: ReadonlyMap<string, number>;
  /** The zone whose fruit is of two kinds. */
  readonly zone: number;
}

/** Pruning weights in kg: fruit of one kind in each zone, but of two in the zone with most vines, heavy on its upper half and light on its lower: two pieces of ground, as no crew could draw a border round specks. */
export async function twoPopulations(desk: SamplingDesk, { targets, blockId }: PlanView): Promise<Brought> {
  const heightAt = await desk.layerValues(blockId, 'elevation');
  const vinesIn = (wanted: number) => targets.filter(({ zone }) => zone === wanted);
  const zone = [...new Set(targets.map((target) => target.zone))].sort((a, b) => vinesIn(b).length - vinesIn(a).length)[0]!;
  const heights = vinesIn(zone).map(({ position }) => heightAt(position)).sort((a, b) => a - b);
  const middle = heights[Math.floor(heights.length / 2)]!;
  const values = targets.map((target, i) => {
    const least = target.zone !== zone ? 0.6 : heightAt(target.position) >= middle ? 1.2 : 0.3;
    return [target.id, Math.round(100 * least * (1 + 0.15 * ((i * 7) % 5))) / 100] as const;
  });
  return { values: new Map(values), zone };
}

/** Stein's two-stage count for a relative margin, worked out here from the values typed: s₁ / mean for each zone, its own degrees of freedom, and its vines. */
export function steinCounts({ targets, basis }: PlanView, brought: Brought, { margin, confidence }: { margin: number; confidence: number }): number[] {
  return basis.zones.map(({ number, vines }) => {
    const values = targets.filter(({ zone }) => zone === number).map(({ id }) => brought.values.get(id)!);
    const mean = values.reduce((sum, value) => sum + value, 0) / values.length;
    const variance = values.reduce((sum, value) => sum + (value - mean) ** 2, 0) / (values.length - 1);
    const unlimited = (studentTUpperQuantile((1 - confidence) / 2, values.length - 1) * (Math.sqrt(variance) / mean / margin)) ** 2;
    return Math.max(values.length, Math.ceil(unlimited / (1 + unlimited / vines)));
  });
}
