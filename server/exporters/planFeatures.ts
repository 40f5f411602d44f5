import type { PlanView } from '../../shared/contracts/plans.ts';
import type { FeatureLayer } from './features/featureLayer.ts';

/** The target vines of a plan as points, in walking order. */
export function planFeatures(plan: PlanView): FeatureLayer {
  const zones = new Map(plan.basis.zones.map(({ number, name }) => [number, name]));
  return {
    name: 'targets',
    title: `${plan.blockName}: ${plan.name}`,
    madeAt: new Date(plan.createdAt),
    fields: [
      { name: 'walk_order', type: 'integer' },
      { name: 'block', type: 'text' },
      { name: 'zone', type: 'integer' },
      { name: 'zone_name', type: 'text' },
      { name: 'row', type: 'text' },
      { name: 'vine', type: 'integer' },
      { name: 'reserve_r', type: 'text' },
      { name: 'reserve_v', type: 'integer' },
      { name: 'measures', type: 'text' },
    ],
    features: plan.targets.map(({ position, walkOrder, zone, rowLabel, vineNumber, reserve, measures }) => ({
      values: [walkOrder, plan.blockName, zone, zones.get(zone) ?? '', rowLabel, vineNumber, reserve?.rowLabel ?? null, reserve?.vineNumber ?? null, measures.join(' ')],
      shape: { kind: 'point', at: [position[0], position[1]] },
    })),
  };
}
