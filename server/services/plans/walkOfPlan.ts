import type { PlanWalk, walkQuestion } from '../../../shared/contracts/planWalks.ts';
import { planChoices } from '../../../shared/contracts/planChoices.ts';
import type { z } from 'zod';
import { fromUtm, toUtm } from '../../../shared/geo/utm.ts';
import type { Access } from '../../access/access.ts';
import type { SharedRound } from '../../ground/shareRound.ts';
import { loadTerrain } from '../../ground/terrain.ts';
import { Plan } from '../../models/Plan.ts';
import { Target } from '../../models/Target.ts';
import { runCompute } from '../../workers/computePool.ts';
import { loadPlanGround } from './planGround.ts';
import { shareInputOf } from './walkInput.ts';

/** The walk past a plan's vines from a gate, shared among people, as lines on the map: what a round would be, before it is sent. */
export async function walkOfPlan(access: Access, planId: string, asked: z.infer<typeof walkQuestion>): Promise<PlanWalk> {
  const { estateId } = access;
  const plan = await Plan.query().findOne({ estateId, id: planId }).throwIfNotFound();
  const planGround = await loadPlanGround(estateId, plan.zoningId);
  const targets = await Target.query().where({ estateId, planId }).orderBy('walkOrder');
  const terrain = await loadTerrain(estateId, planGround.ground);
  const { epsg } = planGround.ground.block;
  const gateXY = asked.gate ? toUtm(asked.gate, epsg) : planGround.gateXY;
  const people = Math.min(asked.people, Math.max(1, targets.length));
  const shared = targets.length === 0 ? { walks: [], isEven: true } : await runCompute<SharedRound>('shareRound', shareInputOf(planGround, plan, targets, { gateXY, people, end: asked.end, terrain }), { lane: 'quick' });
  const [lon, lat] = fromUtm(gateXY, epsg);
  return {
    gate: [lon, lat],
    isGateAssumed: asked.gate === null && planGround.isGateAssumed,
    isEven: shared.isEven,
    slopesFrom: planChoices.parse(plan.options).pace.onSlopes ? (terrain?.name ?? null) : null,
    people: shared.walks.map(({ lengthM, walkingS, serviceS, pathXY, lines }) => ({
      lengthM, walkingS, serviceS,
      path: pathXY.map((xy) => { const [x, y] = fromUtm(xy, epsg); return [x, y] as [number, number]; }),
      targetIds: lines.map(({ target }) => targets[target]!.id),
    })),
  };
}
