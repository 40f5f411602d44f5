import type { z } from 'zod';
import type { DayWalk, dayQuestion } from '../../../shared/contracts/planWalks.ts';
import { fromUtm, toUtm } from '../../../shared/geo/utm.ts';
import { chainBlocks } from '../../../shared/sampling/walkChain.ts';
import type { Access } from '../../access/access.ts';
import { Missing } from '../../errors.ts';
import { Plan } from '../../models/Plan.ts';
import { loadPlanGround } from './planGround.ts';
import { viewPlan } from './viewPlan.ts';

/** Ways between gates bend: a straight line times this (judgement; a farm's own tracks are not known). */
const detour = 1.3;

interface Stop {
  planId: string;
  planName: string;
  blockName: string;
  vines: number;
  seconds: number;
  gate: [number, number];
}

/** Plans of several blocks in the order that costs least time from gate to gate, each with its own walk. The day begins and ends where one likes. */
export async function dayOfPlans(access: Access, { plans: planIds, kmPerHour, keepOrder }: z.infer<typeof dayQuestion>): Promise<DayWalk> {
  const found = await Plan.query().where({ estateId: access.estateId }).findByIds(planIds).select('id', 'zoningId');
  if (found.length < planIds.length) throw new Missing();
  const stops: Stop[] = [];
  for (const planId of planIds) stops.push(await stopOf(access, planId, found.find(({ id }) => id === planId)!.zoningId));
  const travel = (from: number, to: number) => (detour * metresBetween(stops[from]!.gate, stops[to]!.gate)) / (kmPerHour / 3.6);
  const { visits } = chainBlocks({
    gateCounts: stops.map(() => 1),
    walkCost: (block) => stops[block]!.seconds,
    travelCost: (from, to) => (from === null || to === null ? 0 : travel(from.block, to.block)),
    keepOrder,
  });
  const blocks = visits.map(({ block }, i) => ({ ...stops[block]!, travelS: i === 0 ? 0 : travel(visits[i - 1]!.block, block) }));
  return { blocks, totalS: blocks.reduce((sum, { seconds, travelS }) => sum + seconds + travelS, 0) };
}

async function stopOf(access: Access, planId: string, zoningId: string): Promise<Stop> {
  const plan = await viewPlan(access, planId);
  const { gateXY, ground } = await loadPlanGround(access.estateId, zoningId);
  const [lon, lat] = fromUtm(gateXY, ground.block.epsg);
  return { planId, planName: plan.name, blockName: plan.blockName, vines: plan.vines, seconds: plan.walk === null ? plan.hours * 3600 : plan.walk.walkingS + plan.walk.serviceS, gate: [lon, lat] };
}

/** In the metres of the first place's zone: blocks of one estate may lie in two. */
function metresBetween(one: [number, number], other: [number, number]): number {
  const epsg = (one[1] >= 0 ? 32600 : 32700) + Math.floor((one[0] + 180) / 6) + 1;
  const [a, b] = [toUtm(one, epsg), toUtm(other, epsg)];
  return Math.hypot(a[0] - b[0], a[1] - b[1]);
}
