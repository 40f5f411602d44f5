import { decodeLabels } from '../../../shared/analysis/cellBytes.ts';
import type { Labels } from '../../../shared/analysis/grid.ts';
import type { PlanBasis } from '../../../shared/contracts/planBasis.ts';
import type { PlanChoices } from '../../../shared/contracts/planChoices.ts';
import type { RowFrame } from '../../../shared/geo/rowFrame.ts';
import { fromUtm } from '../../../shared/geo/utm.ts';
import { MOST_TARGETS, type PlanDraw } from '../../../shared/sampling/drawPlan.ts';
import { vinesNearBorder } from '../../../shared/sampling/eligibleBorder.ts';
import { answerPlan, type PlanAnswer, type TimesAtVine } from '../../../shared/sampling/plan.ts';
import type { PlanQuestion } from '../../../shared/sampling/planQuestion.ts';
import { headOf } from '../../../shared/sampling/pooledZones.ts';
import { alleySides } from '../../../shared/sampling/rowSide.ts';
import { walksAsLaid } from '../../../shared/sampling/walkEstimate.ts';
import { Unusable } from '../../errors.ts';
import { gridOf } from '../../ground/blockVines.ts';
import { drawVines, type DrawInput } from '../../ground/drawVines.ts';
import { loadTerrain } from '../../ground/terrain.ts';
import { say } from '../../sentences/say.ts';
import { runCompute } from '../../workers/computePool.ts';
import { loadPlanBasis } from './planBasis.ts';
import { loadPlanGround, type PlanGround } from './planGround.ts';

/** Version of the calculation; stored with each plan, so that it can be told which one made it. */
export const planEngine = 'plan-1';

/** The exact walk past more vines than this takes tenths of a second, which other people's requests would wait for; fewer are sooner drawn here than in a thread. */
const drawnHere = 250;

export interface ComposedPlan {
  choices: PlanChoices;
  planGround: PlanGround;
  basis: PlanBasis;
  answer: PlanAnswer;
  draw: PlanDraw;
}

/** A plan with its vines and walk: reads the ground and history, then calculates; writes nothing. */
export async function composePlan(estateId: string, zoningId: string, made: { choices: PlanChoices; seed: number }): Promise<ComposedPlan> {
  const { choices } = made;
  const planGround = await loadPlanGround(estateId, zoningId, choices.draw);
  const [basis, terrain] = await Promise.all([loadPlanBasis(estateId, planGround, choices.spread), loadTerrain(estateId, planGround.ground)]);
  const answer = answerPlan(basis, choices);
  const { visits } = answer.counts;
  if (visits > MOST_TARGETS) throw new Unusable('tooManyVines', say('tooManyToDraw', { n: visits, most: MOST_TARGETS }));
  const { ground, unusable, gateXY } = planGround;
  const input: DrawInput = {
    rows: ground.rows, table: ground.vines, ...sampledZones(planGround, choices), unusable, gateXY, rule: choices.draw, pace: choices.pace, terrain, times: timesOf(answer.question),
    wanted: answer.counts.zones.map(({ zone, visits, counts }) => ({ zone: Number(zone), visits, counts })),
    measures: answer.question.measures.map(({ code }) => code),
    sides: sidesOf(basis, choices, ground.rows.frame),
    reserveShare: choices.reserveShare,
    seed: made.seed,
  };
  const draw = visits > drawnHere ? await runCompute<PlanDraw>('drawVines', input, { lane: 'quick' }) : drawVines(input);
  // From here on the walk's time is that of the vines drawn, also when somebody looks what other margins would cost.
  const walks = walksAsLaid(basis.walks, { vines: draw.targets.length, walkingS: draw.walkingS }, choices.pace);
  const laid = { ...basis, walks, isWalkLaid: walks.length > 0 && draw.targets.length > 0 };
  return { choices, planGround, basis: laid, answer: answerPlan(laid, choices), draw };
}

/** Sides of the rows that the chosen measures ask for; refused where they ask for both, as one walk passes a vine on one side. */
function sidesOf({ measures, blockName }: PlanBasis, { measures: chosen }: PlanChoices, frame: RowFrame): Record<string, 'low' | 'high'> {
  const asked = measures.filter(({ code }) => chosen.some((choice) => choice.code === code));
  const sides = alleySides(frame, asked);
  const nameOn = (side: 'low' | 'high') => asked.find(({ code }) => sides[code] === side);
  const [low, high] = [nameOn('low'), nameOn('high')];
  if (low && high) throw new Unusable('bothSides', say('measuresOnBothSides', { one: low.name || low.code, other: high.name || high.code, block: blockName }));
  return sides;
}

/** A question estimates walks with a function, which cannot cross to a thread. */
function timesOf({ zones, measures, effort }: PlanQuestion): TimesAtVine {
  return {
    zones: zones.map(({ zone, secondsMore }) => ({ zone, ...(secondsMore === undefined ? {} : { secondsMore }) })),
    measures: measures.map(({ code, secondsPerSample }) => ({ code, secondsPerSample })),
    effort: { secondsPerVine: effort.secondsPerVine },
  };
}

/** Zones as they are sampled: those of a pool are one, and the border between them is none. */
function sampledZones({ zoning, ground, zoneOf, nearBorder }: PlanGround, { pools, draw }: PlanChoices): { zoneOfVine: Uint8Array; nearBorder?: Uint8Array } {
  if (pools.length === 0) return { zoneOfVine: zoneOf, ...(nearBorder ? { nearBorder } : {}) };
  const headOfZone = Uint8Array.from({ length: 256 }, (_, zone) => headOf(pools, zone));
  const zoneOfVine = zoneOf.map((zone) => headOfZone[zone]!);
  if (nearBorder === null) return { zoneOfVine };
  const labels = decodeLabels(zoning.labels!).map((zone) => headOfZone[zone]!) as Labels;
  return { zoneOfVine, nearBorder: vinesNearBorder({ grid: gridOf(ground), labels }, { ...ground.vines, zoneOfVine }, draw.borderM ?? undefined) };
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
