import type { PlanBasis, PlanChoices } from '../../../shared/contracts/plans.ts';
import { fromUtm } from '../../../shared/geo/utm.ts';
import { drawPlan, type PlanDraw } from '../../../shared/sampling/drawPlan.ts';
import { answerPlan, type PlanAnswer } from '../../../shared/sampling/plan.ts';
import { loadPlanBasis } from './planBasis.ts';
import { loadPlanGround, type PlanGround } from './planGround.ts';

/** Version of the calculation; stored with each plan, so that it can be told which one made it. */
export const planEngine = 'plan-1';

export interface ComposedPlan {
  planGround: PlanGround;
  basis: PlanBasis;
  answer: PlanAnswer;
  draw: PlanDraw;
}

/** A plan with its vines and walk: reads the ground and history, then calculates; writes nothing. */
export async function composePlan(estateId: string, zoningId: string, made: { choices: PlanChoices; seed: number }): Promise<ComposedPlan> {
  const planGround = await loadPlanGround(estateId, zoningId);
  const basis = await loadPlanBasis(estateId, planGround);
  const answer = answerPlan(basis, made.choices);
  const { ground, zoneOf, unusable, nearBorder, gateXY } = planGround;
  const draw = drawPlan({
    rows: ground.rows, table: ground.vines, zoneOfVine: zoneOf, unusable, nearBorder, gateXY,
    wanted: answer.counts.zones.map(({ visits, counts }, i) => ({ zone: basis.zones[i]!.number, visits, counts })),
    measures: answer.question.measures.map(({ code, secondsPerSample }) => ({ code, secondsPerSample })),
    seed: made.seed,
  });
  return { planGround, basis, answer, draw };
}

/** What is stored of the calculation beside choices and seed. NaN becomes null on the way. */
export function recordOf({ planGround, basis, answer, draw }: ComposedPlan) {
  return {
    basis,
    counts: answer.counts,
    advice: answer.advice,
    draw: draw.zones.map(({ zone, eligibleCount, relaxed, places, targets }, i) => ({ zone, wanted: answer.counts.zones[i]!.visits, drawn: targets.length, eligible: eligibleCount, relaxed, places })),
    walk: { lengthM: draw.lengthM, walkingS: draw.walkingS, serviceS: draw.serviceS, isGateAssumed: planGround.isGateAssumed, isGroundAssumedOpen: draw.isGroundAssumedOpen },
  };
}

export function positionOf({ ground }: PlanGround, vine: number): [number, number] {
  const [lon, lat] = fromUtm([ground.vines.x[vine]!, ground.vines.y[vine]!], ground.block.epsg);
  return [lon, lat];
}
